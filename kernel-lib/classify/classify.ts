import { basename } from 'node:path';
import { derivedColumn, step, type Column, type Step, type StepCarries, type StepDetail, type Suite } from '../suite';
import { bibliography } from '../tables';
import { axisValues, isVolatileFree, operandsOf, whyMissing, type AxisValues, type IronBasis, type Operands } from './axes';
import { findScheme, sourceText } from './catalogue';
import { compileScheme } from './compile';
import { judgeCriteria } from './criteria';
import { distanceToEdge, fieldAt } from './geometry';
import { applyConditions } from './conditions';
import { probabilities, type ProbabilityMethod, type Uncertainty } from './probability';
import { RemarkBook } from './remarks';
import type { Scheme } from './scheme';
import { verdictsOf, type SchemeVerdict, type Verdicts } from './verdicts';

/** How `classify` works. */
export interface ClassifyOptions {
  /** Iron in the volatile-free sum (default `measured`: FeO and Fe2O3 kept where both are measured, as the IUGS rule asks). */
  readonly iron?: IronBasis;
  /** `analytic` (default where any 1σ is known), `sampled`, or `none`. */
  readonly probability?: ProbabilityMethod | 'none';
  /** 1σ by analyte, where the suite has none: `{ K2O: { relative: 0.03 }, SiO2: { absolute: 0.2 } }`. */
  readonly uncertainty?: Uncertainty;
  /** Draws a sample for `sampled` (default 2000). */
  readonly draws?: number;
  /** Seed for `sampled` (default 1). */
  readonly seed?: number;
}

const ironBases: readonly IronBasis[] = ['measured', 'total-as-FeO', 'total-as-Fe2O3'];

/** @internal Checks the options once, into a complete set. */
export function classifyOptions(
  options: ClassifyOptions,
  by: string,
): Required<Omit<ClassifyOptions, 'probability'>> & Pick<ClassifyOptions, 'probability'> {
  const { iron = 'measured', probability, uncertainty = {}, draws = 2000, seed = 1 } = options;
  if (!ironBases.includes(iron)) throw new RangeError(`${by}: iron must be one of ${ironBases.join(', ')}, not "${String(iron)}".`);
  if (probability !== undefined && !['analytic', 'sampled', 'none'].includes(probability)) {
    throw new RangeError(`${by}: probability must be "analytic", "sampled" or "none", not "${String(probability)}".`);
  }
  if (!Number.isInteger(draws) || draws < 10 || draws > 1e6)
    throw new RangeError(`${by}: draws must be a whole number from 10 to 1,000,000, not ${String(draws)}.`);
  if (!Number.isInteger(seed)) throw new RangeError(`${by}: seed must be a whole number, not ${String(seed)}.`);
  for (const [symbol, each] of Object.entries(uncertainty)) {
    const bad =
      each === null ||
      typeof each !== 'object' ||
      [each.relative, each.absolute].every((value) => value === undefined) ||
      [each.relative, each.absolute].some((value) => value !== undefined && !(value >= 0 && Number.isFinite(value)));
    if (bad)
      throw new RangeError(
        `${by}: uncertainty of ${symbol} must be { relative: fraction } or { absolute: value in the column's unit }, each 0 or more.`,
      );
  }
  return { iron, probability, uncertainty, draws, seed };
}

/**
 * Asks classification schemes about every sample.
 *
 * A verdict holds the field (symbol, name), the distance to the nearest real boundary, a remark where there is no field or something to
 * mind, and the probability of each field where 1σ is known. A point on a boundary belongs to the field of higher x (for silica: the
 * lower bound is inclusive); on a horizontal boundary to the upper one. A sample that lacks an analyte is not determined, and the remark
 * says which.
 *
 * @param suite n samples, as analysed or already volatile-free; oxides in wt %, elements in ppm. Schemes on a volatile-free basis recast by
 *   themselves
 * @param which keys of schemes (see `schemes.list()`), or schemes themselves
 * @param options `iron`; `probability`; `uncertainty` (1σ given by hand); `draws`, `seed`
 * @returns verdicts by scheme key, each with arrays of n
 * @throws RangeError for an unknown scheme or option
 * @source the works named by each scheme
 * @example classify(suite, ['tas', 'potassium-silica', 'iron-enrichment', 'afm'])
 */
export function classify(suite: Suite, which: string | Scheme | readonly (string | Scheme)[], options: ClassifyOptions = {}): Verdicts {
  const settings = classifyOptions(options, 'classify');
  const asked = [which].flat().map((each) => (typeof each === 'string' ? findScheme(each) : each));
  if (asked.length === 0) throw new RangeError('classify: name at least one scheme, e.g. classify(suite, ["tas"]); schemes.list() shows all.');
  const operands = operandsOf(suite, settings.iron);
  const found = new Map<string, SchemeVerdict>();
  for (const scheme of asked) found.set(scheme.key, judge(operands, scheme));
  const chance = probabilities(suite, [...found.values()], settings);
  for (const [key, probability] of chance.byScheme) found.set(key, { ...found.get(key)!, probability });
  const own = asked.filter(({ origin }) => origin !== 'built in').map(({ origin }) => basename(origin));
  const detail: StepDetail = {
    schemes: asked.map(({ key }) => key),
    iron: isVolatileFree(suite) ? 'as recast before' : settings.iron,
    ...(own.length === 0 ? {} : { ownSchemes: own }),
    ...chance.detail,
  };
  const because: Step = step('classify', detail, schemesCarried(asked));
  return verdictsOf(suite, found, [...operands.onBasis('volatile-free').lineage, because]);
}

/** @internal What a step that asked these schemes carries: works, tables, what is cited from memory, and words for a methods section. */
export function schemesCarried(asked: readonly Scheme[]): StepCarries {
  const cited = ({ title, sources }: Scheme) => `${title} (${sources.map(sourceText).join('; ')})`;
  return {
    sources: [...new Set(asked.flatMap(({ sources }) => sources))].filter((key) => bibliography().has(key)),
    tables: asked.filter(({ origin }) => origin === 'built in').map(({ key }) => `schemes/${key}.json`),
    fromMemory: asked.filter(({ standing }) => standing === 'from memory').map((scheme) => `boundaries of ${cited(scheme)}`),
    says: `Samples were classified by ${asked.map(cited).join(', ')}.`,
  };
}

/** One scheme on one suite, without probabilities. */
export function judge(operands: Operands, scheme: Scheme): SchemeVerdict {
  const { size } = operands.suite;
  const book = new RemarkBook(size);
  const field = new Int16Array(size).fill(-1);
  const distance = new Float64Array(size).fill(NaN);
  const axes = scheme.axes.map(({ expression }) => axisValues(operands, expression, scheme.basis));
  const plane = planeValues(scheme, axes);
  let criteria: SchemeVerdict['criteria'] = [];
  if (scheme.kind === 'criteria') criteria = judgeCriteria(operands, scheme, field, book);
  else if (scheme.kind === 'points') book.all('this diagram places a sample; it has no recovered boundary');
  else if (scheme.kind === 'thresholds') judgeBounds(operands, scheme, axes, field, distance, book);
  else judgePlane(operands, scheme, axes, plane, field, distance, book);
  applyConditions(operands, scheme, field, distance, book);
  const symbolOf = scheme.fields.map(({ symbol }) => symbol);
  const nameOf = scheme.fields.map(({ name }) => name);
  const symbols = new Array<string>(size);
  const names = new Array<string>(size);
  for (let i = 0; i < size; i++) {
    symbols[i] = field[i] < 0 ? '' : symbolOf[field[i]];
    names[i] = field[i] < 0 ? '' : nameOf[field[i]];
  }
  return { scheme, field, symbols, names, distance, remarks: book.texts(), x: plane.x, y: plane.y, criteria };
}

/** x and y of a scheme; the three corners of a triangle are closed to 100. */
function planeValues(scheme: Scheme, axes: readonly AxisValues[]): { x?: Column; y?: Column } {
  if (scheme.plane === 'rectangular') return { x: axes[0].column, y: axes[1].column };
  const [a, b, c] = axes.map(({ column }) => column);
  if (a === undefined || b === undefined || c === undefined) return {};
  const x = new Float64Array(a.values.length);
  const y = new Float64Array(a.values.length);
  for (let i = 0; i < x.length; i++) {
    const sum = a.values[i] + b.values[i] + c.values[i];
    x[i] = (100 * a.values[i]) / sum;
    y[i] = (100 * b.values[i]) / sum;
  }
  return { x: derivedColumn(a.symbol, x, '%'), y: derivedColumn(b.symbol, y, '%') };
}

function judgePlane(
  operands: Operands,
  scheme: Scheme,
  axes: readonly AxisValues[],
  plane: { x?: Column; y?: Column },
  field: Int16Array,
  distance: Float64Array,
  book: RemarkBook,
): void {
  const { size } = operands.suite;
  const { flat } = compileScheme(scheme);
  const logX = scheme.axes[0].scale === 'log';
  const logY = scheme.axes[1].scale === 'log';
  const ternary = scheme.plane === 'ternary';
  const halfRootThree = Math.sqrt(3) / 2;
  const outside = outsideTexts(scheme);
  const beyond = scheme.fields.map(
    ({ published: [from, to] }) => `beyond the published range of the boundary (${scheme.axes[0].title} ${from}–${to})`,
  );
  const from = Float64Array.from(scheme.fields, ({ published }) => published[0]);
  const to = Float64Array.from(scheme.fields, ({ published }) => published[1]);
  const xs = plane.x?.values;
  const ys = plane.y?.values;
  for (let i = 0; i < size; i++) {
    const x = xs === undefined ? NaN : xs[i];
    const y = ys === undefined ? NaN : ys[i];
    if (!Number.isFinite(x) || !Number.isFinite(y)) {
      book.note(i, whyNoPoint(operands, scheme, axes, i));
      continue;
    }
    const px = ternary ? 100 - x - y / 2 : logX ? Math.log10(x) : x;
    const py = ternary ? y * halfRootThree : logY ? Math.log10(y) : y;
    const k = fieldAt(flat, px, py);
    field[i] = k;
    if (k < 0) {
      book.note(
        i,
        x < outside.x[0] || x >= outside.x[1] ? outside.xText : y < outside.y[0] || y >= outside.y[1] ? outside.yText : 'in no field of the scheme',
      );
      continue;
    }
    distance[i] = distanceToEdge(flat, k, px, py);
    if (x < from[k] || x > to[k]) book.note(i, beyond[k]);
  }
}

function whyNoPoint(operands: Operands, scheme: Scheme, axes: readonly AxisValues[], row: number): string {
  const failing = axes.filter(({ column }) => column === undefined || !Number.isFinite(column.values[row]));
  return whyMissing(operands, failing, scheme.basis, row);
}

/** The range that the fields cover, and what is said of a point outside it; made once a scheme. */
function outsideTexts({ axes: [first, second], frame, fields }: Scheme): {
  x: readonly [number, number];
  y: readonly [number, number];
  xText: string;
  yText: string;
} {
  const xs = fields.flatMap(({ vertices }) => vertices.map(([x]) => x));
  const x = [Math.max(frame.x[0], Math.min(...xs)), Math.min(frame.x[1], Math.max(...xs))] as const;
  const text = (title: string, [low, high]: readonly [number, number]) => `outside the range of the scheme: ${title} is not within ${low}–${high}`;
  return { x, y: frame.y, xText: text(first.title, x), yText: text(second.title, frame.y) };
}

function judgeBounds(
  operands: Operands,
  scheme: Scheme,
  axes: readonly AxisValues[],
  field: Int16Array,
  distance: Float64Array,
  book: RemarkBook,
): void {
  const [, axis] = axes;
  const { bounds } = scheme;
  const log = scheme.axes[1].scale === 'log';
  for (let i = 0; i < field.length; i++) {
    const value = axis.column === undefined ? NaN : axis.column.values[i];
    if (!Number.isFinite(value) || (log && value <= 0)) {
      book.note(i, whyNoPoint(operands, scheme, [axis], i));
      continue;
    }
    let k = 0;
    while (k < bounds.length && value >= bounds[k]) k++;
    field[i] = k;
    let nearest = Infinity;
    for (const bound of bounds) nearest = Math.min(nearest, Math.abs(log ? Math.log10(value / bound) : value - bound));
    distance[i] = nearest;
  }
}
