import { evaluate, resolveColumn, step, suiteOf, type Suite } from '../suite';
import { publishedConstant } from '../tables';
import { withIsotopes } from '../tracers';
import { axisTitle, symbolText } from './chemical-text';
import { diagramOf, type Diagram } from './diagram';
import { checkWindow, windowAround } from './frame';
import type { LineShape } from './layers/lines';
import type { PathInput } from './model-paths';
import { reservoirMarks } from './reservoir-markers';
import type { SampleOptions } from './sample-points';
import { xy } from './xy';

/** The ready isotope plots. */
export const isotopePlotNames = ['strontium-neodymium', 'strontium-epsilon', 'neodymium-hafnium', 'lead-207', 'lead-208', 'lead-neodymium'] as const;
export type IsotopePlotName = (typeof isotopePlotNames)[number];

/** What an isotope plot takes, besides what all diagrams take. */
export interface IsotopePlotOptions extends SampleOptions {
  /** Keys of the reservoirs that are marked (default: depleted mantle, mean MORB and subducting sediment; `[]` for none). */
  readonly reservoirs?: readonly string[];
  /** Mixing lines: results of `mix`, drawn with ticks. */
  readonly paths?: readonly PathInput[];
}

const axesOf: Readonly<Record<IsotopePlotName, readonly [string, string]>> = {
  'strontium-neodymium': ['87Sr/86Sr', '143Nd/144Nd'],
  'strontium-epsilon': ['87Sr/86Sr', 'epsilon-Nd'],
  'neodymium-hafnium': ['epsilon-Nd', 'epsilon-Hf'],
  'lead-207': ['206Pb/204Pb', '207Pb/204Pb'],
  'lead-208': ['206Pb/204Pb', '208Pb/204Pb'],
  'lead-neodymium': ['206Pb/204Pb', '143Nd/144Nd'],
};

const defaultReservoirs = ['depleted-mantle-2005', 'all-morb-2013', 'subducting-sediment-1998'] as const;

/**
 * Isotope ratios against each other, with reservoirs and mixing lines: `strontium-neodymium`, `strontium-epsilon` (⁸⁷Sr/⁸⁶Sr–εNd),
 * `neodymium-hafnium` (εNd–εHf), `lead-207` and `lead-208` (with the Northern Hemisphere Reference Line), `lead-neodymium`.
 *
 * @param suite n samples with the isotope ratios of the plot; ε is computed where the suite has none
 * @param name which plot
 * @param options `group`, `reservoirs`, `paths` (mixing lines), and what all diagrams take
 * @throws RangeError for an unknown plot or reservoir, or when the suite lacks a ratio
 * @source Hart 1984 (reference line); reservoirs by their own sources
 * @example diagrams.isotopePlot(suite, 'strontium-neodymium', { group: 'volcano' })
 */
export function isotopePlot(suite: Suite, name: IsotopePlotName, options: IsotopePlotOptions = {}): Diagram {
  if (!(isotopePlotNames as readonly string[]).includes(name))
    throw new RangeError(`isotopePlot: there is no plot "${String(name)}". Known: ${isotopePlotNames.join(', ')}.`);
  const [x, y] = axesOf[name];
  const whole = [x, y].some((axis) => axis.startsWith('epsilon') && !suite.has(axis)) ? withIsotopes(suite) : suite;
  const lacking = [x, y].filter((axis) => resolveColumn(whole, axis) === undefined);
  if (lacking.length > 0)
    throw new RangeError(
      `isotopePlot: "${name}" needs ${lacking.join(' and ')}, which this suite does not hold. It holds: ${suite.analytes.join(', ')}.`,
    );
  const marks = marksOf(options.reservoirs ?? defaultReservoirs, x, y);
  checkWindow('isotopePlot', options.window);
  const asWritten = (axis: string) => (axis.includes('/') ? axis : `[${axis}]`);
  const values = [x, y].map((axis) => evaluate(whole, asWritten(axis), { sigma: false }).values);
  const near = options.window === 'whole' ? marks.markers : marks.markers.filter((mark) => isNear(values[0], mark.x) && isNear(values[1], mark.y));
  const outside = marks.markers.filter((mark) => !near.includes(mark)).map(({ label }) => label);
  const chosen = typeof options.window === 'object' ? options.window : {};
  const around = (k: 0 | 1) => windowAround([values[k], near.map((mark) => (k === 0 ? mark.x : mark.y))], { leastSpan: 1e-4 });
  const window = { x: chosen.x ?? around(0), y: chosen.y ?? around(1) };
  const line = referenceLine(name, window.x);
  const made = xy(whole, asWritten(x), asWritten(y), {
    ...options,
    window,
    reservoirs: marks.markers,
    lines: line === undefined ? [] : [line],
    paths: options.paths,
    axisTitles: { x: symbolText(x), y: symbolText(y) },
    caption: [
      line === undefined ? '' : 'Line: Northern Hemisphere Reference Line (Hart 1984).',
      marks.caption,
      outside.length === 0 ? '' : `Outside the frame: ${outside.join(', ')}.`,
    ].filter((text) => text !== ''),
  });
  const sources = [...(line === undefined ? [] : [publishedConstant('nhrl-207-slope').source]), ...marks.sources];
  const because = step(
    'diagrams.isotopePlot',
    { name, x, y, reservoirs: marks.markers.map(({ label }) => label) },
    { sources: [...new Set(sources)], tables: ['reservoirs.csv', 'constants.csv'] },
  );
  return diagramOf({ ...made, name: `${axisTitle(y)} against ${axisTitle(x)}`, lineage: [...whole.lineage, because] });
}

/** A reservoir may widen the span of the data this many times; beyond, it would leave the data no room and stays outside (but in window `whole`). */
const mostWidening = 3.5;

function isNear(values: ArrayLike<number>, at: number): boolean {
  let low = Infinity;
  let high = -Infinity;
  for (let i = 0; i < values.length; i++) {
    if (values[i] < low) low = values[i];
    if (values[i] > high) high = values[i];
  }
  return !(low < high) || Math.max(high, at) - Math.min(low, at) <= mostWidening * (high - low);
}

/** Marks of reservoirs on isotope axes; ε of a reservoir is computed from its ratio. */
function marksOf(keys: readonly string[], x: string, y: string) {
  const ratioOf = (axis: string) => (axis === 'epsilon-Nd' ? '143Nd/144Nd' : axis === 'epsilon-Hf' ? '176Hf/177Hf' : axis);
  const marks = reservoirMarks(keys, { x: ratioOf(x), y: ratioOf(y) });
  if (ratioOf(x) === x && ratioOf(y) === y) return marks;
  const convert = (axis: string, values: readonly number[]): readonly number[] => {
    if (ratioOf(axis) === axis || values.length === 0) return values;
    const ratio = ratioOf(axis);
    const plain = {
      symbol: ratio,
      kind: 'isotope-ratio' as const,
      unit: '',
      values: Float64Array.from(values),
      states: new Uint8Array(values.length),
    };
    return [...withIsotopes(suiteOf({ columns: [plain] })).values(axis)];
  };
  const [xs, ys] = [
    convert(
      x,
      marks.markers.map((mark) => mark.x),
    ),
    convert(
      y,
      marks.markers.map((mark) => mark.y),
    ),
  ];
  return { ...marks, markers: marks.markers.map((mark, i) => ({ ...mark, x: xs[i], y: ys[i] })) };
}

function referenceLine(name: IsotopePlotName, [low, high]: readonly [number, number]): LineShape | undefined {
  if (name !== 'lead-207' && name !== 'lead-208') return undefined;
  const which = name.slice(-3);
  const [slope, intercept] = [publishedConstant(`nhrl-${which}-slope`).value, publishedConstant(`nhrl-${which}-intercept`).value];
  return { points: [low, high].map((x) => [x, slope * x + intercept] as const), label: 'NHRL' };
}
