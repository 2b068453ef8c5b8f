import { classify, findScheme, probabilityText, typicalDoubt, verdictOf, type Scheme, type Uncertainty } from '../classify';
import type { IronBasis } from '../recast';
import type { Suite } from '../suite';
import { drawable } from './chemical-text';
import type { Diagram } from './diagram';
import { figure } from './figure';
import type { Layer } from './layer';
import { fieldsLayer, type FieldShape } from './layers/fields';
import { linesLayer, type LineShape } from './layers/lines';
import { markersLayer, pathsLayer } from './layers/markers';
import { namesLayer } from './layers/names';
import { samplesLayer } from './layers/samples';
import { shadingLayer } from './layers/shading';
import { pathShapes, type PathInput } from './model-paths';
import { checkSampleOptions, samplePoints, type SampleOptions } from './sample-points';
import { drawnColumns, pathOnScheme, planeOf, schemeFrame, type SchemePlane } from './scheme-plane';
import { missingAxes, reasonOf, schemeCaption, schemeStep, schemeTitles, verdictTexts } from './scheme-words';
import { ternaryLayer } from './ternary';

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
 * @param options `group`, `window`, `altered`, `errors`, `names`, `paths`, `also`, `howSure`, `shading`, `uncertainty`, `iron`, `title`,
 *   `width`, `height` (pixels)
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
  const { iron, howSure = false, shading = 'none', uncertainty = {}, errors = 'none' } = options;
  if (shading !== 'none' && shading !== 'doubt') throw new RangeError(`${who}: shading must be "none" or "doubt", not "${String(shading)}".`);
  const others = otherSchemes(who, chosen, options.also);
  const asked = { uncertainty, ...(iron === undefined ? {} : { iron }), ...(howSure ? {} : { probability: 'none' as const }) };
  const verdicts = classify(suite, chosen, asked);
  const verdict = verdictOf(verdicts, chosen.key);
  const plane = planeOf(chosen, words.corners);
  const columns = drawnColumns(suite, verdict, plane, { sigma: errors !== 'none', iron });
  if (columns === undefined) {
    throw new RangeError(`${who}: no sample has what the axes of "${chosen.key}" need: ${missingAxes(suite, chosen, verdict)}.`);
  }
  const tooltips = new Map<string, ArrayLike<string>>([['verdict', verdictTexts(verdict)]]);
  if (verdict.probability !== undefined) tooltips.set('how sure', Array.from(suite.samples, (_, i) => probabilityText(verdict, i)));
  const [titleX, titleY] = schemeTitles(chosen);
  const reason = (row: number) => reasonOf(chosen, verdict.remarks[row]);
  const [x, y] = chosen.axes.map(({ expression }) => expression);
  const set = samplePoints(who, suite, { x, y, columns, tooltips, axisTitles: [titleX, titleY], reason }, options);
  const paths = pathShapes(who, options.paths, (liquid) => pathOnScheme(who, liquid, chosen, plane, iron));
  const size = { width: options.width ?? words.width ?? 500, height: options.height ?? words.height ?? 380 };
  const frame = schemeFrame(chosen, { samples: set.points, paths: paths.shapes }, { window: options.window, ...size });
  const layers: Layer[] = [
    ...(shading === 'doubt' ? [doubtLayer(who, suite, chosen, plane, options)] : []),
    ...(plane.corners === undefined ? [] : [ternaryLayer(plane.corners)]),
    ...boundaryLayers(chosen, others, plane),
    samplesLayer(set.points, { errors, binAbove: options.binAbove, zoom: !plane.isTernary }),
    ...(options.names === undefined ? [] : [namesLayer(set.points, suite.samples, options.names)]),
    pathsLayer(paths.shapes),
    markersLayer(chosen.points.map(({ name, at }) => ({ label: name, x: plane.place(at)[0], y: plane.place(at)[1] }))),
  ];
  const shade = shading === 'doubt' ? ['Grey: chance of another field for a sample of median error, up to one half.'] : [];
  return figure({
    name: chosen.title,
    title: options.title,
    panels: [{ frame, layers }],
    caption: [...schemeCaption(chosen, others, suite, iron), ...shade, ...paths.notes, ...set.notes],
    counts: set.counts(frame),
    legendWidth: set.legendWidth,
    lineage: [...verdicts.lineage, schemeStep(who, chosen, others)],
  });
}

/** @throws RangeError for schemes that do not lie on the same axes */
function otherSchemes(who: string, chosen: Scheme, also: readonly string[] = []): readonly Scheme[] {
  if (!Array.isArray(also)) throw new RangeError(`${who}: also must be a list of scheme keys, e.g. ["alkalinity"].`);
  const axesOf = ({ axes, basis }: Scheme) => JSON.stringify([basis, axes.map(({ expression }) => expression.replace(/\s+/g, ''))]);
  return also.map((key) => {
    const other = findScheme(key);
    if (axesOf(other) === axesOf(chosen)) return other;
    const text = other.axes.map(({ title }) => title).join(', ');
    throw new RangeError(`${who}: "${key}" has other axes (${text}) than "${chosen.key}", so its boundaries cannot be drawn here.`);
  });
}

/** Fields with their names, or lines that say themselves what they are; boundaries of the other schemes dashed. */
function boundaryLayers(chosen: Scheme, others: readonly Scheme[], { place }: SchemePlane): Layer[] {
  const fields = chosen.fields.filter(({ vertices }) => vertices.length > 0).map(({ symbol, name, vertices, label }): FieldShape => {
    const [x, y] = place([label.x, label.y]);
    return { symbol, name, polygon: vertices.map(place), label: { x, y, text: label.text } };
  });
  const edges = (published: boolean) => chosen.lines.filter((line) => line.published === published).map(({ points }) => points.map(place));
  const own = fields.length > 0
    ? fieldsLayer(fields, { edges: edges(true), conventionEdges: edges(false), width: chosen.kind === 'polygons' ? 0.9 : 1.3 })
    : linesLayer(chosen.lines.map(({ points, name, published }): LineShape => {
      const line = { points: points.map(place), label: drawable(name) };
      return published ? line : { ...line, dash: [4, 3] };
    }));
  const added = others.flatMap(({ lines }) => lines).filter(({ published }) => published)
    .map(({ points, name }): LineShape => ({ points: points.map(place), label: name.replace(' | ', ' / '), dash: [5, 3] }));
  return added.length === 0 ? [own] : [own, linesLayer(added)];
}

/** Doubt of the field over the whole frame. */
function doubtLayer(who: string, suite: Suite, chosen: Scheme, { toAxes }: SchemePlane, { iron, uncertainty }: SchemeDiagramOptions): Layer {
  const doubtAt = (x: readonly number[], y: readonly number[]) => typicalDoubt(suite, chosen, { x, y }, { iron, uncertainty });
  if (doubtAt([], []) === undefined) {
    throw new RangeError(
      `${who}: shading needs 1σ of what "${chosen.key}" reads, and a scheme with fields. ` +
      'Give uncertainty: { SiO2: { relative: 0.01 }, … }, or run the audit, which gives columns their 1σ.',
    );
  }
  return shadingLayer((points) => {
    const on = points.map(toAxes);
    return doubtAt(on.map(([x]) => x), on.map(([, y]) => y))!;
  });
}
