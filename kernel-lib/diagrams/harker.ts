import { volatileFree, withTotalIron, type IronBasis } from '../recast';
import { evaluate, expressionSymbols, parseExpression, resolveColumn, step, type Suite } from '../suite';
import { axisTitle, expressionText } from './chemical-text';
import type { Diagram, DiagramCounts } from './diagram';
import { figure, type Panel } from './figure';
import { windowAround, type Axis, type Frame } from './frame';
import { pathsLayer } from './layers/markers';
import { mostInBin, samplesLayer } from './layers/samples';
import { pathShapes, type PathInput } from './model-paths';
import { checkSampleOptions, samplePoints, type SampleOptions, type SampleSet } from './sample-points';

/** What Harker panels take, besides what all diagrams take. */
export interface HarkerOptions extends Omit<SampleOptions, 'window' | 'names'> {
  /** Horizontal axis of every panel: an expression (default `SiO2`). */
  readonly against?: string;
  /** Vertical axes, one panel each: expressions (default the major oxides). */
  readonly show?: readonly string[];
  /** Whether oxides are recast to 100 % free of volatiles (default), or drawn as analysed. */
  readonly basis?: 'volatile-free' | 'as-analysed';
  readonly iron?: IronBasis;
  readonly paths?: readonly PathInput[];
  /** Panels side by side (default 3). */
  readonly columns?: number;
}

const usual = ['TiO2', 'Al2O3', 'FeOT', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'] as const;

/**
 * Harker panels: oxides, elements or any expressions against silica, or against whatever else is asked.
 *
 * @param suite n samples, oxides in wt %, elements in ppm; recast to volatile-free unless it is so already or `basis` says otherwise
 * @param options `show` (default the major oxides), `against` (default `SiO2`), `basis`, `iron`, `group`, `paths`, `columns`; `width` and
 *   `height` of one panel in pixels
 * @throws RangeError for a bad option, or when not one panel can be drawn; ExpressionError for an unreadable expression
 * @example diagrams.harker(suite, { group: 'volcano', show: ['MgO', 'K2O', 'Sr'] })
 */
export function harker(suite: Suite, options: HarkerOptions = {}): Diagram {
  checkSampleOptions('harker', suite, options);
  const { against = 'SiO2', basis = 'volatile-free', columns = 3, iron = 'total-as-FeO' } = options;
  if (basis !== 'volatile-free' && basis !== 'as-analysed')
    throw new RangeError(`harker: basis must be "volatile-free" or "as-analysed", not "${String(basis)}".`);
  if (!Number.isInteger(columns) || columns < 1) throw new RangeError(`harker: columns must be a whole number from 1, not ${String(columns)}.`);
  const wanted = options.show ?? usual.filter((symbol) => symbol !== against);
  if (!Array.isArray(wanted) || wanted.length === 0)
    throw new RangeError('harker: show must be a list of expressions, e.g. ["MgO", "K2O", "Ba/Th"].');
  const onBasis = (from: Suite) => withIron(basis === 'as-analysed' || from.has('SumAsGiven') ? from : volatileFree(from, { iron }));
  const drawn = onBasis(suite);
  const lacking = wanted.filter((text) => expressionSymbols(parseExpression(text)).some((symbol) => resolveColumn(drawn, symbol) === undefined));
  const shown = wanted.filter((text) => !lacking.includes(text));
  if (shown.length === 0)
    throw new RangeError(`harker: the suite holds none of ${wanted.join(', ')}. It holds: ${suite.analytes.join(', ') || 'no column'}.`);

  const size = { width: options.width ?? (shown.length === 1 ? 420 : 220), height: options.height ?? (shown.length === 1 ? 320 : 165) };
  // One choice for all panels, so that they are read alike.
  const binAbove = suite.size > (options.binAbove ?? 5000) ? 0 : Infinity;
  const sums = drawn.columns.get('SumAsGiven')?.values;
  const reason = (row: number) => (sums !== undefined && Number.isNaN(sums[row]) ? 'without a volatile-free sum' : undefined);
  const sets = shown.map((text): SampleSet =>
    samplePoints('harker', drawn, { x: against, reason, y: text, axisTitles: [title(drawn, against), title(drawn, text)] }, options),
  );
  const paths = shown.map((text) =>
    pathShapes('harker', options.paths, (liquid) => {
      const dry = options.paths === undefined ? liquid : onPathBasis(liquid, basis, iron);
      return { x: evaluate(dry, against, { sigma: false }).values, y: evaluate(dry, text, { sigma: false }).values };
    }),
  );
  // One path is named in the caption; several need their names in the panels.
  const named = shown.length === 1 || paths[0].shapes.length > 1;
  const pathX = paths.flatMap(({ shapes }) => shapes.map(({ points }) => points.map(([x]) => x)));
  const xWindow = windowAround([...sets.map(({ points }) => points.x), ...pathX]);
  const frames = sets.map((set, i): Frame => {
    const y: Axis = {
      title: set.points.axisTitles[1],
      window: windowAround([set.points.y, ...paths[i].shapes.map(({ points }) => points.map((point) => point[1]))]),
    };
    return { ...size, x: { title: set.points.axisTitles[0], window: xWindow }, y };
  });
  const binMost = binAbove === 0 ? Math.max(...sets.map(({ points }, i) => mostInBin(frames[i], points))) : 0;
  const panels = sets.map((set, i): Panel => {
    return {
      frame: frames[i],
      layers: [
        samplesLayer(set.points, { errors: options.errors, binAbove, binMost, inPanel: true }),
        pathsLayer(named ? paths[i].shapes : paths[i].shapes.map((shape) => ({ ...shape, label: undefined }))),
      ],
    };
  });
  const counts = sets.map((set, i) => set.counts(panels[i].frame));
  return figure({
    name: `Harker diagrams against ${expressionText(against)}`,
    title: options.title,
    panels,
    columns,
    caption: [
      ...(basis === 'volatile-free' ? ['Oxides recast to 100 % free of volatiles, total iron as FeO*.'] : ['Oxides as analysed.']),
      ...(lacking.length === 0 ? [] : [`No panel for ${lacking.map(expressionText).join(', ')}: not in the suite.`]),
      ...paths[0].notes,
      ...new Set(sets.flatMap(({ notes }) => notes)),
      perPanel(counts, shown),
    ],
    counts: mostPlotted(counts),
    showCounts: false,
    legendWidth: sets[0].legendWidth,
    lineage: [...drawn.lineage, step('diagrams.harker', { against, show: shown, basis })],
  });
}

/** Total iron in whichever form it was reported, so that FeO* can be drawn. */
function withIron(suite: Suite): Suite {
  return suite.has('FeOT') || !['Fe2O3T', 'FeO', 'Fe2O3'].some((symbol) => suite.has(symbol)) ? suite : withTotalIron(suite);
}

/** A path that holds too few oxides to be recast is drawn as modelled. */
function onPathBasis(liquid: Suite, basis: HarkerOptions['basis'], iron: IronBasis): Suite {
  const whole = ['SiO2', 'Al2O3', 'MgO', 'CaO', 'Na2O', 'K2O', 'FeOT'].every((symbol) => liquid.has(symbol));
  return basis === 'volatile-free' && whole ? volatileFree(liquid, { iron }) : liquid;
}

/** Panels are narrow, so the basis of oxides stands in the caption. */
function title(suite: Suite, text: string): string {
  return axisTitle(text, evaluate(suite, text, { sigma: false }).unit);
}

function mostPlotted(counts: readonly DiagramCounts[]): DiagramCounts {
  return counts.reduce((most, each) => (each.plotted > most.plotted ? each : most));
}

/** `116 of 120 samples plotted in each panel (not plotted: 4 without K₂O).`, or panel by panel where they differ. */
function perPanel(counts: readonly DiagramCounts[], shown: readonly string[]): string {
  const total = counts[0].plotted + counts[0].notPlotted;
  const texts = counts.map(({ plotted, reasons }) =>
    plotted === total
      ? `${total}`
      : `${plotted} of ${total} (not plotted: ${Object.entries(reasons)
          .map(([why, count]) => `${count} ${why}`)
          .join(', ')})`,
  );
  const panels = new Map<string, string[]>();
  texts.forEach((text, i) => panels.set(text, [...(panels.get(text) ?? []), expressionText(shown[i])]));
  if (panels.size === 1) return `Samples plotted${counts.length > 1 ? ' in each panel' : ''}: ${texts[0]}.`;
  const [usualText] = [...panels].reduce((most, each) => (each[1].length > most[1].length ? each : most));
  const others = [...panels].filter(([text]) => text !== usualText).map(([text, names]) => `${names.join(', ')}: ${text}`);
  return `Samples plotted in a panel: ${usualText}; ${others.join('; ')}.`;
}
