import { cellState, evaluate, expressionSymbols, parseExpression, resolveColumn, type Column, type Suite } from '../suite';
import { symbolText } from './chemical-text';
import type { DiagramCounts } from './diagram';
import { legendRoom } from './figure';
import { checkWindow, inWindow, type Frame, type WindowChoice } from './frame';
import { groupSuite, type Grouping } from './groups';
import { pointSide, type SamplePoints } from './layers/samples';

/** What every diagram of samples takes. */
export interface SampleOptions {
  /** Label that gives colour and shape, e.g. `volcano`. */
  readonly group?: string;
  /** What is shown: the data and a margin (`data`, default), all of the diagram (`whole`), or `{ x: [low, high], y: [low, high] }`. */
  readonly window?: WindowChoice;
  /** Samples drawn open: one boolean a sample, or a label that is not empty where the sample is altered (default: label `alteration`). */
  readonly altered?: string | readonly boolean[];
  /** 1σ as bars or ellipses, where the columns have it (default `none`). */
  readonly errors?: 'none' | 'bars' | 'ellipses';
  /** Sample names to write beside their points; `all` for every one. */
  readonly names?: readonly string[] | 'all';
  /** Above this many samples, counts in bins are drawn (default 5,000). */
  readonly binAbove?: number;
  /** Written above the figure. */
  readonly title?: string;
  /** Size of the frame in pixels. */
  readonly width?: number;
  readonly height?: number;
}

/** What the axes show: expressions over analytes, and the reference of normalised ones. */
export interface PointAxes {
  readonly x: string;
  readonly y: string;
  readonly named?: Readonly<Record<string, string>>;
  readonly reference?: (symbol: string) => number;
  readonly axisTitles?: readonly [string, string];
  /** More lines for the tooltip: title → one text or number a sample. */
  readonly tooltips?: ReadonlyMap<string, ArrayLike<string | number>>;
  /** Columns to draw instead of evaluating expressions. */
  readonly columns?: { readonly x: Column; readonly y: Column };
  /** Why a sample may lack a value, asked before the analytes are looked at. */
  readonly reason?: (row: number) => string | undefined;
}

/** The samples of a suite ready to be drawn. */
export interface SampleSet {
  readonly points: SamplePoints;
  readonly grouping?: Grouping;
  /** Caption sentences: what open symbols, arrows, bars, pooled groups mean. */
  readonly notes: readonly string[];
  readonly legendWidth: number;
  /** Counts, once the frame is known: samples outside its window are not plotted. */
  readonly counts: (frame: Frame) => DiagramCounts;
}

/** @throws RangeError naming the option, its value, and what is allowed */
export function checkSampleOptions(who: string, suite: Suite, options: SampleOptions): void {
  if (typeof suite !== 'object' || suite === null || !(suite.columns instanceof Map)) {
    throw new TypeError(`${who}: the first argument must be a Suite (from readAssays, suiteOf, …), not ${suite === null ? 'null' : typeof suite}.`);
  }
  if (typeof options !== 'object' || options === null) throw new TypeError(`${who}: options must be an object such as { group: 'volcano' }.`);
  checkWindow(who, options.window);
  const { errors = 'none', altered, names, binAbove, width, height, group } = options;
  if (!['none', 'bars', 'ellipses'].includes(errors))
    throw new RangeError(`${who}: errors must be "none", "bars" or "ellipses", not "${String(errors)}".`);
  if (Array.isArray(altered) && altered.length !== suite.size)
    throw new RangeError(`${who}: altered has ${altered.length} entries, the suite has ${suite.size} samples; give one of each.`);
  if (names !== undefined && names !== 'all' && !Array.isArray(names)) throw new RangeError(`${who}: names must be "all" or a list of sample names.`);
  if (binAbove !== undefined && !(binAbove >= 0)) throw new RangeError(`${who}: binAbove must be a number of samples, not ${String(binAbove)}.`);
  for (const [name, size] of Object.entries({ width, height })) {
    if (size !== undefined && !(size >= 80 && size <= 4000)) throw new RangeError(`${who}: ${name} must be 80 to 4000 pixels, not ${String(size)}.`);
  }
  if (group !== undefined && !suite.labels.has(group)) {
    throw new RangeError(`${who}: there is no label "${String(group)}" to group by. The suite has: ${[...suite.labels.keys()].join(', ')}.`);
  }
}

const notAltered = /^(|-|none|no|fresh|unaltered|false|0)$/i;

/** 1 for each sample that is flagged as altered; undefined where nothing says so. */
export function alteredSamples(suite: Suite, altered: SampleOptions['altered']): Uint8Array | undefined {
  if (altered !== undefined && typeof altered !== 'string') return Uint8Array.from(altered, (flag) => (flag ? 1 : 0));
  const label = altered ?? [...suite.labels.keys()].find((name) => name.toLowerCase() === 'alteration');
  return label === undefined ? undefined : Uint8Array.from(suite.label(label), (text) => (notAltered.test(text.trim()) ? 0 : 1));
}

/**
 * The samples of a suite on two axes: values, bounds, groups, flags, tooltips, and why a sample is not there.
 *
 * @param who name of the diagram, for error messages
 * @throws RangeError for a bad option; ExpressionError for an axis the suite cannot give
 */
export function samplePoints(who: string, suite: Suite, axes: PointAxes, options: SampleOptions = {}): SampleSet {
  checkSampleOptions(who, suite, options);
  const ask = { named: axes.named, reference: axes.reference };
  const xs = axes.columns?.x ?? evaluate(suite, axes.x, ask);
  const ys = axes.columns?.y ?? evaluate(suite, axes.y, ask);
  const size = suite.size;
  const x = xs.values.slice();
  const y = ys.values.slice();
  const side = new Uint8Array(size);
  let bounded = 0;
  for (let i = 0; i < size; i++) {
    // One limited value can be drawn as an arrow; where the other axis has no value either, nothing can.
    const across = Number.isNaN(x[i]);
    if (across === Number.isNaN(y[i])) continue;
    const limited = boundOf(across ? xs : ys, i);
    if (limited === undefined) continue;
    const isBelow = limited === cellState.belowDetection;
    if (across) {
      x[i] = xs.limits![i];
      side[i] = isBelow ? pointSide.left : pointSide.right;
    } else {
      y[i] = ys.limits![i];
      side[i] = isBelow ? pointSide.below : pointSide.above;
    }
    bounded++;
  }
  // A sample with one value is not drawn, so it must not widen the window either.
  for (let i = 0; i < size; i++) if (Number.isNaN(x[i]) || Number.isNaN(y[i])) x[i] = y[i] = NaN;
  const grouping = options.group === undefined || size === 0 ? undefined : groupSuite(suite, options.group);
  const open = alteredSamples(suite, options.altered);
  const tooltips = new Map<string, ArrayLike<string | number>>([['sample', suite.samples]]);
  if (options.group !== undefined && options.group !== 'sample') tooltips.set(options.group, suite.label(options.group));
  for (const [title, values] of axes.tooltips ?? []) tooltips.set(title, values);
  const points: SamplePoints = {
    x,
    y,
    tooltips,
    axisTitles: axes.axisTitles ?? [axes.x, axes.y],
    ...(bounded > 0 ? { side } : {}),
    ...(grouping === undefined ? {} : { group: grouping.index, groups: grouping.scale }),
    ...(open === undefined ? {} : { open }),
    ...(xs.sigma === undefined ? {} : { sigmaX: xs.sigma }),
    ...(ys.sigma === undefined ? {} : { sigmaY: ys.sigma }),
  };
  return {
    points,
    ...(grouping === undefined ? {} : { grouping }),
    notes: captionNotes(points, grouping, options, bounded),
    legendWidth: grouping === undefined ? 0 : legendRoom(grouping.scale.title, grouping.scale.names),
    counts: (frame) => countSamples(suite, axes, points, frame),
  };
}

function boundOf(of: Column, row: number): number | undefined {
  const state = of.states[row];
  return (state === cellState.belowDetection || state === cellState.aboveRange) && Number.isFinite(of.limits?.[row]) ? state : undefined;
}

const errorNotes = { bars: 'Bars: 1σ.', ellipses: 'Ellipses: 1σ of each axis, taken as uncorrelated.' } as const;

function hasSigma({ sigmaX, sigmaY }: SamplePoints, errors: 'bars' | 'ellipses'): boolean {
  const known = [sigmaX, sigmaY].map((sigma) => sigma?.some((value) => value > 0) === true);
  return errors === 'bars' ? known.includes(true) : known.every(Boolean);
}

function captionNotes(points: SamplePoints, grouping: Grouping | undefined, options: SampleOptions, bounded: number): string[] {
  const notes: string[] = [];
  const drawn = countDrawn(points);
  if (drawn > (options.binAbove ?? 5000)) {
    return ['Colour is the number of samples in a bin, on a log scale; groups and altered samples are not told apart.'];
  }
  if (points.open?.includes(1)) notes.push('Open symbols: flagged as altered.');
  if (bounded > 0) notes.push('Arrows: value only known to lie on that side of the detection or range limit drawn.');
  const { errors = 'none' } = options;
  if (errors !== 'none') notes.push(hasSigma(points, errors) ? errorNotes[errors] : 'No 1σ is known, so no errors are drawn.');
  if (grouping !== undefined && grouping.pooled > 0) notes.push(`The ${grouping.pooled} smallest groups are drawn as one.`);
  return notes;
}

export function countDrawn({ x, y }: Pick<SamplePoints, 'x' | 'y'>): number {
  let drawn = 0;
  for (let i = 0; i < x.length; i++) if (Number.isFinite(x[i]) && Number.isFinite(y[i])) drawn++;
  return drawn;
}

function countSamples(suite: Suite, axes: PointAxes, { x, y }: SamplePoints, frame: Frame): DiagramCounts {
  const reasons = new Map<string, number>();
  const because = (reason: string) => reasons.set(reason, (reasons.get(reason) ?? 0) + 1);
  let plotted = 0;
  let why: ((row: number) => string) | undefined;
  for (let i = 0; i < x.length; i++) {
    const known = Number.isFinite(x[i]) && Number.isFinite(y[i]);
    if (known && inWindow(frame, x[i], y[i])) plotted++;
    else if (known)
      because(
        (frame.x.scale === 'log' && x[i] <= 0) || (frame.y.scale === 'log' && y[i] <= 0)
          ? 'not positive, which a log axis cannot show'
          : 'outside the window',
      );
    else because(axes.reason?.(i) ?? (why ??= missingReason(suite, axes))(i));
  }
  return { plotted, notPlotted: x.length - plotted, reasons: Object.fromEntries([...reasons].sort((a, b) => b[1] - a[1])) };
}

/** Says which analyte a sample lacks. */
function missingReason(suite: Suite, { x, y, named }: PointAxes): (row: number) => string {
  const symbols = new Set<string>();
  for (const text of [x, y]) {
    try {
      expressionSymbols(parseExpression(text, named)).forEach((symbol) => symbols.add(symbol));
    } catch {
      // An axis that is drawn from ready columns need not be an expression.
    }
  }
  const columns = [...symbols].map((symbol) => [symbol, resolveColumn(suite, symbol)] as const);
  return (row) => {
    for (const [symbol, column] of columns)
      if (column === undefined || column.states[row] === cellState.missing) return `without ${symbolText(symbol)}`;
    const limited = columns.some(([, column]) => column!.states[row] === cellState.belowDetection || column!.states[row] === cellState.aboveRange);
    return limited ? 'with limits that give no bound' : 'without a value';
  };
}
