import {
  classify,
  findScheme,
  probabilityText,
  schemeColumns,
  typicalDoubt,
  verdictOf,
  type Scheme,
  type SchemeVerdict,
  type Uncertainty,
} from '../classify';
import type { IronBasis } from '../recast';
import { column, step, type Column, type Suite } from '../suite';
import { bibliography, shortSource } from '../tables';
import { bracketed, drawable, dressText } from './chemical-text';
import type { Diagram } from './diagram';
import { figure } from './figure';
import { windowAround, type Axis, type Frame } from './frame';
import type { Point } from './geometry';
import { fieldsLayer } from './layers/fields';
import { markersLayer, pathsLayer } from './layers/markers';
import { linesLayer } from './layers/lines';
import { namesLayer } from './layers/names';
import { samplesLayer } from './layers/samples';
import { shadingLayer } from './layers/shading';
import type { Layer } from './layer';
import { pathShapes, type PathInput } from './model-paths';
import { checkSampleOptions, samplePoints, type SampleOptions } from './sample-points';
import { ternaryFrame, ternaryLayer, ternaryPoint, ternaryShares, type TernaryCorner } from './ternary';

/** What the diagram of a classification scheme takes, besides what all diagrams take. */
export interface SchemeDiagramOptions extends SampleOptions {
  /** Iron in the volatile-free sum (default `measured`, as `classify`). */
  readonly iron?: IronBasis;
  /** Paths of models, put on the scheme's axes. */
  readonly paths?: readonly PathInput[];
  /** Keys of other schemes on the same axes, whose boundaries are added as dashed lines: `['alkalinity']` on TAS. */
  readonly also?: readonly string[];
  /** Whether hovering says how likely each field is, where 1σ is known (default false: it takes time). */
  readonly howSure?: boolean;
  /** `doubt` shades where a sample with the usual errors of the suite may as well lie in another field (needs 1σ; default `none`). */
  readonly shading?: 'none' | 'doubt';
  /** 1σ by analyte for `howSure` and `shading`, where the suite has none: `{ K2O: { relative: 0.03 } }`. */
  readonly uncertainty?: Uncertainty;
}

/** @internal What the well-known diagrams add to a scheme's own words. */
export interface SchemeWords {
  readonly who: string;
  readonly corners?: readonly [string, string, string];
  readonly width?: number;
  readonly height?: number;
}

/**
 * Draws any classification scheme with the samples of a suite on it: a built-in one by its key, or your own (`schemes.load`).
 *
 * Samples are put on the scheme's basis first (a suite that is volatile-free already is taken as it is). Hovering shows the verdict.
 *
 * @param suite n samples, oxides in wt %, elements in ppm
 * @param which key of a scheme (see `schemes.list()`), or a scheme
 * @param options `group`, `window`, `altered`, `errors`, `names`, `paths`, `also`, `iron`, `title`, `width`, `height` (pixels)
 * @throws RangeError for an unknown scheme, a bad option, or a suite that lacks an axis altogether
 * @source the works named by the scheme
 * @example diagrams.scheme(suite, 'alkalinity', { group: 'volcano' })
 */
export function scheme(suite: Suite, which: string | Scheme, options: SchemeDiagramOptions = {}): Diagram {
  return schemeDiagram(suite, which, options, { who: 'scheme' });
}

/** @internal */
export function schemeDiagram(suite: Suite, which: string | Scheme, options: SchemeDiagramOptions, words: SchemeWords): Diagram {
  const { who } = words;
  checkSampleOptions(who, suite, options);
  const chosen = typeof which === 'string' ? findScheme(which) : which;
  const { iron, howSure = false, shading = 'none', uncertainty = {} } = options;
  if (shading !== 'none' && shading !== 'doubt') throw new RangeError(`${who}: shading must be "none" or "doubt", not "${String(shading)}".`);
  const verdicts = classify(suite, chosen, {
    uncertainty,
    ...(iron === undefined ? {} : { iron }),
    ...(howSure ? {} : { probability: 'none' as const }),
  });
  const verdict = verdictOf(verdicts, chosen.key);
  // A suite of no samples has no columns to speak of, and draws the empty diagram.
  const { x = emptyColumn(suite), y = emptyColumn(suite) } = verdict;
  if (x === undefined || y === undefined)
    throw new RangeError(`${who}: no sample has what the axes of "${chosen.key}" need: ${dressText(missingAxes(suite, chosen, verdict))}.`);
  const isTernary = chosen.plane === 'ternary';
  const titles = chosen.axes.map((axis) =>
    drawable(bracketed(axis.title, axis.unit, chosen.basis === 'volatile-free' && axis.unit === 'wt %' ? 'volatile-free' : '')),
  );
  const place = ([x, y]: Point): Point => (isTernary ? ternaryPoint(chosen.mirrored ? 100 - x - y : x, y) : [x, y]);
  const columns = isTernary
    ? ternaryColumns(x, y, place)
    : options.errors === undefined || options.errors === 'none'
      ? { x, y }
      : withSigma(suite, chosen, x, y, iron);
  const tooltips = new Map<string, ArrayLike<string>>([['verdict', verdictTexts(verdict)]]);
  if (verdict.probability !== undefined)
    tooltips.set(
      'how sure',
      Array.from({ length: suite.size }, (_, i) => probabilityText(verdict, i)),
    );
  const set = samplePoints(
    who,
    suite,
    {
      x: chosen.axes[0].expression,
      y: chosen.axes[1].expression,
      columns,
      tooltips,
      axisTitles: [titles[0], titles[1]],
      reason: (row) => reasonOf(chosen, verdict.remarks[row]),
    },
    options,
  );
  const paths = pathShapes(who, options.paths, (liquid) => onScheme(who, liquid, chosen, place, iron));
  const frame = isTernary ? ternaryFrame(options.width ?? words.width) : schemeFrame(chosen, titles, set.points, paths.shapes, options, words);
  const others = (options.also ?? []).map(findScheme);
  const fields = chosen.fields
    .filter(({ vertices }) => vertices.length > 0)
    .map(({ symbol, name, vertices, label }) => {
      const [lx, ly] = place([label.x, label.y]);
      return { symbol, name, polygon: vertices.map(place), label: { x: lx, y: ly, text: label.text } };
    });
  const edges = (published: boolean) => chosen.lines.filter((line) => line.published === published).map(({ points }) => points.map(place));
  const letters = words.corners;
  const corners = isTernary
    ? (chosen.axes.map((axis, i): TernaryCorner =>
        letters === undefined ? { name: drawable(axis.title) } : { name: letters[i], meaning: drawable(axis.title) },
      ) as unknown as [TernaryCorner, TernaryCorner, TernaryCorner])
    : undefined;
  if (chosen.mirrored) corners?.reverse();
  const shade = shading === 'doubt' ? doubtLayer(who, suite, chosen, options) : undefined;
  const layers = [
    ...(shade === undefined ? [] : [shade]),
    ...(corners === undefined ? [] : [ternaryLayer(corners)]),
    // Lines that divide no fields say themselves what they are.
    ...(fields.length > 0
      ? []
      : [
          linesLayer(
            chosen.lines.map(({ points, name, published }) => ({
              points: points.map(place),
              label: drawable(name),
              ...(published ? {} : { dash: [4, 3] }),
            })),
          ),
        ]),
    fieldsLayer(fields, {
      edges: fields.length > 0 ? edges(true) : [],
      conventionEdges: fields.length > 0 ? edges(false) : [],
      width: chosen.kind === 'polygons' ? 0.9 : 1.3,
    }),
    ...(others.length === 0
      ? []
      : [
          linesLayer(
            others.flatMap((other) =>
              other.lines
                .filter(({ published }) => published)
                .map(({ points, name }) => ({ points: points.map(place), label: name.replace(' | ', ' / '), dash: [5, 3] })),
            ),
          ),
        ]),
    samplesLayer(set.points, { ...options, zoom: !isTernary }),
    ...(options.names === undefined ? [] : [namesLayer(set.points, suite.samples, options.names)]),
    pathsLayer(paths.shapes),
    markersLayer(chosen.points.map(({ name, at }) => ({ label: name, x: place(at)[0], y: place(at)[1] }))),
  ];
  const sources = [...new Set([chosen, ...others].flatMap((each) => each.sources))];
  const dashed =
    chosen.lines.some(({ published }) => !published) && chosen.kind === 'lines' ? ['Dashed: continued straight beyond the published ends.'] : [];
  return figure({
    name: chosen.title,
    title: options.title,
    panels: [{ frame, layers }],
    caption: [
      `${chosen.kind === 'points' ? 'Reference points' : chosen.kind === 'criteria' ? 'Criteria' : 'Boundaries'}: ${sources.map(cite).join('; ')}.`,
      basisSentence(chosen, suite, iron, isTernary, titles),
      ...dashed,
      ...(shade === undefined ? [] : ['Grey: chance of another field for a sample of median error, up to one half.']),
      ...paths.notes,
      ...set.notes,
    ],
    counts: set.counts(frame),
    legendWidth: set.legendWidth,
    lineage: [
      ...verdicts.lineage,
      step(
        `diagrams.${who}`,
        { scheme: chosen.key, also: others.map(({ key }) => key) },
        {
          sources: sources.filter((key) => bibliography().has(key)),
          tables: [chosen, ...others].filter(({ origin }) => origin === 'built in').map(({ key }) => `schemes/${key}.json`),
          fromMemory: [chosen, ...others]
            .filter(({ standing }) => standing === 'from memory')
            .map(({ title, sources: from }) => `boundaries of ${title} (${from.map(cite).join('; ')})`),
        },
      ),
    ],
  });
}

/** Doubt of the field over the whole frame. */
function doubtLayer(who: string, suite: Suite, chosen: Scheme, { iron, uncertainty }: SchemeDiagramOptions): Layer {
  const known = typicalDoubt(suite, chosen, { x: [], y: [] }, { iron, uncertainty });
  if (known === undefined) {
    throw new RangeError(
      `${who}: shading needs 1σ of what "${chosen.key}" reads, and a scheme with fields. Give uncertainty: { SiO2: { relative: 0.01 }, … }, or run the audit, which gives columns their 1σ.`,
    );
  }
  const toAxes = ([x, y]: Point): Point => {
    if (chosen.plane !== 'ternary') return [x, y];
    const [first, second] = ternaryShares(x, y);
    return [chosen.mirrored ? 100 - first - second : first, second];
  };
  return shadingLayer((points) => {
    const on = points.map(toAxes);
    return typicalDoubt(suite, chosen, { x: on.map(([x]) => x), y: on.map(([, y]) => y) }, { iron, uncertainty })!;
  });
}

function emptyColumn(suite: Suite): Column | undefined {
  return suite.size === 0 ? column({ symbol: '', values: [] }) : undefined;
}

function cite(key: string): string {
  return bibliography().has(key) ? shortSource(key) : key;
}

/** Why a sample has no place: of schemes that divide a plane, the verdict says it; others speak of their criteria instead. */
function reasonOf({ kind, basis }: Scheme, remark: string): string | undefined {
  if (kind === 'criteria' || kind === 'points') return basis === 'volatile-free' ? 'without a volatile-free sum' : undefined;
  return (
    dressText(remark)
      .replace(/^needs /, 'without ')
      .replace(/; needs /g, ', ') || undefined
  );
}

function missingAxes(suite: Suite, { axes }: Scheme, { remarks }: SchemeVerdict): string {
  return `${axes.map(({ title }) => title).join(', ')} (${remarks[0] ?? 'missing'}; the suite holds ${suite.analytes.join(', ') || 'no column'})`;
}

function basisSentence({ basis, axes }: Scheme, suite: Suite, iron: IronBasis = 'measured', isTernary: boolean, titles: readonly string[]): string {
  const units = [...new Set(axes.map(({ unit }) => unit))].filter((unit) => unit !== '');
  const axesText = isTernary ? ` Triangle: ${units.length === 1 ? units[0] : titles.join('; ')}, closed to 100 %.` : '';
  if (basis !== 'volatile-free') return axesText.trim();
  const recast = 'Recast to 100 % free of volatiles';
  const total = axes.some(({ expression }) => /FeOT|Fe2O3T/.test(expression)) ? ' FeO*: total iron as FeO.' : '';
  if (suite.has('SumAsGiven')) return `${recast}.${total}${axesText}`;
  return `${recast}, iron ${{ measured: 'as measured', 'total-as-FeO': 'as FeO*', 'total-as-Fe2O3': 'as Fe₂O₃*' }[iron]}.${total}${axesText}`;
}

function verdictTexts({ names, remarks }: SchemeVerdict): string[] {
  return names.map((name, i) =>
    name === '' ? `not determined: ${dressText(remarks[i])}` : remarks[i] === '' ? name : `${name} (${dressText(remarks[i])})`,
  );
}

function ternaryColumns(first: Column, second: Column, place: (point: Point) => Point): { x: Column; y: Column } {
  const x = new Float64Array(first.values.length);
  const y = new Float64Array(first.values.length);
  for (let i = 0; i < x.length; i++) [x[i], y[i]] = place([first.values[i], second.values[i]]);
  return { x: { ...first, values: x }, y: { ...second, values: y } };
}

function withSigma(suite: Suite, chosen: Scheme, x: Column, y: Column, iron: IronBasis | undefined): { x: Column; y: Column } {
  const [sx, sy] = schemeColumns(suite, chosen, iron);
  return { x: sx ?? x, y: sy ?? y };
}

function onScheme(
  who: string,
  liquid: Suite,
  chosen: Scheme,
  place: (point: Point) => Point,
  iron: IronBasis | undefined,
): { x: Float64Array; y: Float64Array } {
  const { x, y, remarks } = verdictOf(classify(liquid, chosen, { probability: 'none', ...(iron === undefined ? {} : { iron }) }), chosen.key);
  if (x === undefined || y === undefined || !x.values.some(Number.isFinite))
    throw new RangeError(`${who}: a path cannot be drawn here, because its liquid ${dressText(remarks[0] ?? 'is empty')}.`);
  const px = new Float64Array(x.values.length);
  const py = new Float64Array(x.values.length);
  for (let i = 0; i < px.length; i++) [px[i], py[i]] = place([x.values[i], y.values[i]]);
  return { x: px, y: py };
}

function schemeFrame(
  chosen: Scheme,
  titles: readonly string[],
  samples: { readonly x: Float64Array; readonly y: Float64Array },
  paths: readonly { points: readonly Point[] }[],
  { window = 'data', width, height }: SchemeDiagramOptions,
  words: SchemeWords,
): Frame {
  const axis = (side: 'x' | 'y'): Axis => {
    const at = side === 'x' ? 0 : 1;
    const { scale } = chosen.axes[at];
    const whole = chosen.window[side];
    // A little more than the samples, so that their fields can be told; never beyond the frame that fields are closed on.
    const leastSpan = scale === 'log' ? Math.max(4, (whole[1] / whole[0]) ** 0.35) : (whole[1] - whole[0]) * 0.3;
    const within = mostlyInside(samples[side], whole) ? whole : chosen.frame[side];
    const around = () =>
      windowAround([samples[side], ...paths.map(({ points }) => points.map((point) => point[at]))], { scale, whole, leastSpan, within });
    const limits = typeof window === 'object' ? (window[side] ?? around()) : window === 'whole' ? whole : around();
    return { title: titles[at], scale, window: limits };
  };
  return { width: width ?? words.width ?? 500, height: height ?? words.height ?? 380, x: axis('x'), y: axis('y') };
}

/**
 * Of many samples, a few far outliers do not squeeze the rest: where 95 % lie in the usual window, it bounds the diagram, and those outside
 * are counted.
 */
function mostlyInside(values: Float64Array, [low, high]: readonly [number, number]): boolean {
  const known = values.filter(Number.isFinite);
  return known.length >= 100 && known.filter((value) => value >= low && value <= high).length >= 0.95 * known.length;
}
