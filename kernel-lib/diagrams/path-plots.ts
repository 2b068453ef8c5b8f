import type { DescentFit, ModelPath } from '../models';
import { step, type Suite } from '../suite';
import { axisTitle, numberText, symbolText } from './chemical-text';
import type { Diagram } from './diagram';
import { figure, type Panel } from './figure';
import { windowAround, type Frame } from './frame';
import { linesLayer } from './layers/lines';
import { rareEarths, spider, type PatternDiagramOptions } from './patterns';
import { groupColours, ink } from './theme';
import { xy, type XyOptions } from './xy';
import type { ResultDiagramOptions } from './balance-plots';

function checkPath(who: string, path: ModelPath): void {
  if (typeof path !== 'object' || path === null || !(path.F instanceof Float64Array) || path.liquid === undefined)
    throw new TypeError(`${who}: give the path of a model, as crystallise or wholeRockPath returns it.`);
}

/** More names than this crowd a diagram. */
const mostNames = 6;

/** What `pathPatterns` takes. */
export interface PathPatternOptions extends Omit<PatternDiagramOptions, 'group' | 'curves' | 'band' | 'altered'> {
  /** Values of F to draw (default: five along the path, both ends among them). */
  readonly at?: readonly number[];
  /** `rare-earths` or `multi-element` (default: rare earths where the path holds five of them). */
  readonly kind?: 'rare-earths' | 'multi-element';
}

/**
 * Patterns of the liquid along a path, one curve at each of several values of F.
 *
 * @param path the result of a model whose liquid holds the elements (ppm)
 * @param options `at` values of F; `kind` `rare-earths` | `multi-element`; `reference`, `order`, `also`, `window`, `title`, `width`, `height`
 * @throws TypeError for something that is no path; RangeError for an F outside it
 * @example diagrams.pathPatterns(path, { at: [1, 0.8, 0.6, 0.4], kind: 'rare-earths' })
 */
export function pathPatterns(path: ModelPath, options: PathPatternOptions = {}): Diagram {
  const who = 'pathPatterns';
  checkPath(who, path);
  const { at = [0, 0.25, 0.5, 0.75, 1].map((part) => path.F[Math.round(part * (path.F.length - 1))]), kind, ...rest } = options;
  const [low, high] = [Math.min(...path.F), Math.max(...path.F)];
  const rows = [
    ...new Set(
      at.map((value) => {
        if (!(value >= low - 1e-9 && value <= high + 1e-9))
          throw new RangeError(
            `${who}: at holds ${String(value)}; the path runs from F = ${numberText(path.F[0])} to ${numberText(path.F[path.F.length - 1])}.`,
          );
        let nearest = 0;
        for (let i = 1; i < path.F.length; i++) if (Math.abs(path.F[i] - value) < Math.abs(path.F[nearest] - value)) nearest = i;
        return nearest;
      }),
    ),
  ];
  const earths = ['La', 'Ce', 'Pr', 'Nd', 'Sm', 'Eu', 'Gd', 'Tb', 'Dy', 'Ho', 'Er', 'Tm', 'Yb', 'Lu'].filter((symbol) => path.liquid.has(symbol));
  const chosen = kind ?? (earths.length >= 5 ? 'rare-earths' : 'multi-element');
  if (chosen !== 'rare-earths' && chosen !== 'multi-element')
    throw new RangeError(`${who}: kind must be "rare-earths" or "multi-element", not "${String(kind)}".`);
  const suite = path.liquid.rows(rows);
  const labelled = suite.withLabels({ [`F (${path.meaning})`]: rows.map((row) => numberText(Number(path.F[row].toPrecision(3)))) });
  return (chosen === 'rare-earths' ? rareEarths : spider)(labelled, { ...rest, group: `F (${path.meaning})` });
}

/**
 * Composition of liquid and crystals along a path: a panel an oxide or element, with the liquid, the crystals that form at each step, and all
 * crystals so far (the cumulate).
 *
 * @param path the result of `crystallise`, `wholeRockPath` or another model that keeps its crystals
 * @param options `show` analytes (default the oxides of the path, or its first six elements); `columns`, `title`, `width` and `height` of one panel
 * @throws TypeError for something that is no path; RangeError when it keeps no crystals or lacks an analyte
 * @example diagrams.cumulateComposition(wholeRock, { show: ['SiO2', 'MgO', 'Al2O3'] })
 */
export function cumulateComposition(
  path: ModelPath,
  options: ResultDiagramOptions & { readonly show?: readonly string[]; readonly columns?: number } = {},
): Diagram {
  const who = 'cumulateComposition';
  checkPath(who, path);
  const { solid, cumulate, liquid, F } = path;
  if (solid === undefined || cumulate === undefined)
    throw new RangeError(`${who}: a path of ${path.process.toLowerCase()} keeps no account of its crystals.`);
  const held = cumulate.analytes.filter((symbol) => symbol !== 'F');
  const oxides = held.filter((symbol) => cumulate.column(symbol).kind === 'oxide' && cumulate.values(symbol).some((value) => value > 0.5));
  const show = options.show ?? (oxides.length > 0 ? oxides : held.slice(0, 6));
  const lacking = show.filter((symbol) => !held.includes(symbol));
  if (lacking.length > 0 || show.length === 0)
    throw new RangeError(`${who}: the crystals of this path have no ${lacking.join(', ') || 'analyte'}; they have ${held.join(', ')}.`);
  const along = (values: Float64Array) =>
    Array.from(values, (value, i): [number, number] => [F[i], value]).filter(([, value]) => Number.isFinite(value));
  const panels = show.map((symbol, p): Panel => {
    const kinds = [
      { values: liquid.values(symbol), label: 'liquid', colour: groupColours[1], width: 1.8 },
      { values: solid.values(symbol), label: 'forming', colour: groupColours[0], width: 1.3, dash: [4, 3] },
      { values: cumulate.values(symbol), label: 'all crystals', colour: groupColours[0], width: 1.8 },
    ];
    const frame: Frame = {
      width: options.width ?? 210,
      height: options.height ?? 160,
      x: {
        title: p >= show.length - (options.columns ?? 3) ? `F, ${path.meaning}` : '',
        window: windowAround([F], { leastSpan: 0.02 }),
        reversed: F[0] > F[F.length - 1],
      },
      y: { title: axisTitle(symbol, liquid.column(symbol).unit), window: windowAround(kinds.map(({ values }) => values)) },
    };
    return {
      frame,
      layers: [linesLayer(kinds.map(({ values, label, ...style }) => ({ points: along(values), ...style, ...(p === 0 ? { label } : {}) })))],
    };
  });
  return figure({
    name: `Liquid and crystals of ${path.process.toLowerCase()}`,
    title: options.title,
    panels,
    columns: options.columns,
    caption: [`${path.process}. Orange: liquid; blue: all crystals so far (cumulate), dashed: those forming at each step.`],
    lineage: [...path.lineage, step('diagrams.cumulateComposition', { show: [...show] })],
  });
}

/**
 * Two elements of a suite in log–log space with the line of descent that was fitted to it; samples that do not belong are told apart, and named
 * where they are few.
 *
 * @param suite the suite that was fitted
 * @param fit the result of `fitDescent`
 * @param x element of the horizontal axis (ppm)
 * @param y element of the vertical axis (ppm)
 * @param options those of `xy`
 * @throws RangeError for an element that the fit did not use
 * @example diagrams.descentLine(suite, fitDescent(suite), 'Rb', 'Ni', { group: 'volcano' })
 */
export function descentLine(suite: Suite, fit: DescentFit, x: string, y: string, options: XyOptions = {}): Diagram {
  const who = 'descentLine';
  if (!Array.isArray(fit?.elements) || !Array.isArray(fit.samples)) throw new TypeError(`${who}: give the result of fitDescent.`);
  const of = (symbol: string) => {
    const found = fit.elements.find(({ element }) => element === symbol);
    if (found === undefined)
      throw new RangeError(`${who}: the fit did not use "${symbol}"; it used ${fit.elements.map(({ element }) => element).join(', ')}.`);
    return found;
  };
  const [ex, ey] = [of(x), of(y)];
  const range = fit.samples.filter(({ belongs }) => belongs).map(({ F }) => F);
  const ends = [Math.max(...range), Math.min(...range)];
  const points = Array.from({ length: 41 }, (_, i): [number, number] => {
    const F = ends[0] * (ends[1] / ends[0]) ** (i / 40);
    return [ex.parent * F ** (ex.D - 1), ey.parent * F ** (ey.D - 1)];
  });
  const out = fit.samples.filter(({ belongs }) => !belongs).map(({ sample }) => sample);
  const line = { points, colour: ink.path, width: 1.5 };
  // The fit keeps the suite's order but skips samples with too few elements.
  let next = 0;
  const standing = suite.samples.map((sample) => (fit.samples[next]?.sample === sample ? (fit.samples[next++].belongs ? 'yes' : 'no') : 'not used'));
  // Samples on the line come first, so that they take the first colour.
  const order = [...standing.keys()].sort((a, b) => Number(standing[b] === 'yes') - Number(standing[a] === 'yes'));
  const labelled = options.group === undefined ? suite.withLabels({ 'on the line': standing }).rows(order) : suite;
  return xy(labelled, x, y, {
    scale: 'log',
    ...(out.length <= mostNames ? { names: out } : {}),
    group: 'on the line',
    ...options,
    lines: [...(options.lines ?? []), line],
    caption: [
      ...(options.caption ?? []),
      `Line: fitted descent, D of ${symbolText(x)} ${ex.D.toFixed(2)} ± ${ex.DSigma.toFixed(2)}, of ${symbolText(y)} ${ey.D.toFixed(2)} ± ` +
        `${ey.DSigma.toFixed(2)}.${out.length > 0 && out.length <= mostNames ? ' Named: samples that do not belong to it.' : ''}`,
    ],
  });
}
