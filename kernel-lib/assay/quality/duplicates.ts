import { findAnalyte } from '../../chemistry';
import type { Column, Suite } from '../../suite';
import { median } from './recoveries';

/** Precision of one analyte from duplicates. */
export interface DuplicatePrecision {
  readonly analyte: string;
  /** Pairs, or groups of more, with usable values. */
  readonly groups: number;
  readonly degreesOfFreedom: number;
  /** Pooled relative standard deviation, %. */
  readonly relative: number;
  /** Pooled standard deviation, in the column's unit. */
  readonly absolute: number;
  /** Largest relative difference of a pair, %, and its sample. */
  readonly worst: number;
  readonly worstSample: string;
  /** Precision against concentration, where there are enough pairs. */
  readonly line?: PrecisionLine;
}

/** 1σ at a concentration: `intercept + slope × concentration`. */
export interface PrecisionLine {
  readonly intercept: number;
  readonly slope: number;
  readonly pairs: number;
  readonly groups: number;
}

/** A pair that disagrees in everything: one of the two is probably another sample. */
export interface UnlikePair {
  readonly rows: readonly [number, number];
  readonly sample: string;
  readonly words: string;
}

/** Rows that share a name, reference materials and blanks left out. */
export function duplicateGroups(base: readonly string[], left: (row: number) => boolean): number[][] {
  const groups = new Map<string, number[]>();
  base.forEach((name, row) => {
    if (name === '' || left(row)) return;
    const group = groups.get(name);
    if (group === undefined) groups.set(name, [row]);
    else group.push(row);
  });
  return [...groups.values()].filter((rows) => rows.length > 1);
}

/** Precision of every measured quantity from groups of duplicates. */
export function duplicatePrecision(suite: Suite, groups: readonly (readonly number[])[]): DuplicatePrecision[] {
  return [...suite.columns.values()]
    .filter(({ symbol }) => findAnalyte(symbol) !== undefined)
    .map((column) => precisionOf(suite, column, groups))
    .filter(({ groups: count }) => count > 0);
}

function precisionOf(suite: Suite, { symbol, values }: Column, groups: readonly (readonly number[])[]): DuplicatePrecision {
  let squares = 0;
  let relativeSquares = 0;
  let freedom = 0;
  let used = 0;
  let worst = 0;
  let worstSample = '';
  const pairs: { centre: number; difference: number }[] = [];
  for (const rows of groups) {
    const group = rows.filter((row) => Number.isFinite(values[row]));
    if (group.length < 2) continue;
    const centre = group.reduce((sum, row) => sum + values[row], 0) / group.length;
    if (centre === 0) continue;
    let sum = 0;
    for (const row of group) sum += (values[row] - centre) ** 2;
    squares += sum;
    relativeSquares += sum / centre ** 2;
    freedom += group.length - 1;
    used++;
    const difference = Math.max(...group.map((row) => values[row])) - Math.min(...group.map((row) => values[row]));
    if ((100 * difference) / Math.abs(centre) > worst) {
      worst = (100 * difference) / Math.abs(centre);
      worstSample = suite.samples[group[0]];
    }
    if (group.length === 2) pairs.push({ centre, difference });
  }
  const line = precisionLine(pairs);
  return {
    analyte: symbol,
    groups: used,
    degreesOfFreedom: freedom,
    relative: 100 * Math.sqrt(relativeSquares / freedom),
    absolute: Math.sqrt(squares / freedom),
    worst,
    worstSample,
    ...(line === undefined ? {} : { line }),
  };
}

const pairsInGroup = 11;
/** Fewer pairs than this scatter too much for a line. */
const fewestPairs = 50;
/** σ of a normal distribution over the median of |x₁ − x₂|: 1 / (√2 · 0.6745). */
const sigmaOfMedianDifference = 1.0484;

/**
 * The line of 1σ against concentration from duplicate pairs: pairs are sorted by their mean and taken in groups of eleven; the median
 * difference of a group, × 1.048, is its 1σ; a straight line is fitted to these against the groups' mean concentrations.
 *
 * @param pairs mean and absolute difference of each pair, in the column's unit
 * @returns undefined for fewer than 50 pairs
 * @source Thompson & Howarth 1976
 */
export function precisionLine(pairs: readonly { readonly centre: number; readonly difference: number }[]): PrecisionLine | undefined {
  if (pairs.length < fewestPairs) return undefined;
  const sorted = [...pairs].sort((a, b) => a.centre - b.centre);
  const x: number[] = [];
  const y: number[] = [];
  for (let from = 0; from + pairsInGroup <= sorted.length; from += pairsInGroup) {
    // What is left over at the high end joins the last group.
    const to = sorted.length - from < 2 * pairsInGroup ? sorted.length : from + pairsInGroup;
    const group = sorted.slice(from, to);
    x.push(group.reduce((sum, { centre }) => sum + centre, 0) / group.length);
    y.push(sigmaOfMedianDifference * median(group.map(({ difference }) => difference)));
    if (to === sorted.length) break;
  }
  const meanX = x.reduce((sum, each) => sum + each, 0) / x.length;
  const meanY = y.reduce((sum, each) => sum + each, 0) / y.length;
  const spread = x.reduce((sum, each) => sum + (each - meanX) ** 2, 0);
  if (!(spread > 0)) return undefined;
  const slope = x.reduce((sum, each, i) => sum + (each - meanX) * (y[i] - meanY), 0) / spread;
  return { intercept: meanY - slope * meanX, slope, pairs: pairs.length, groups: x.length };
}

/** Names that stand on unlike rows this often are reused, as compilations of many papers do: they do not mark duplicates. */
const mostUnlike = 5;
const mostUnlikeShare = 0.3;

/** Whether equal names mark duplicates in this suite at all. */
export function namesAreReused(unlike: readonly UnlikePair[], groups: readonly (readonly number[])[]): boolean {
  const names = new Set(unlike.map(({ sample }) => sample)).size;
  return names > mostUnlike && names > mostUnlikeShare * groups.length;
}

/** Pairs that disagree in most analytes at once, which no laboratory does: a name stands on the wrong row. */
export function unlikePairs(suite: Suite, groups: readonly (readonly number[])[]): UnlikePair[] {
  const columns = [...suite.columns.values()].filter(
    ({ symbol }) => findAnalyte(symbol)?.kind === 'oxide' || findAnalyte(symbol)?.kind === 'element',
  );
  const distance = (a: number, b: number): number => {
    const offs: number[] = [];
    for (const { values } of columns) if (values[a] > 0 && values[b] > 0) offs.push(Math.abs(Math.log(values[a] / values[b])));
    return offs.length < 5 ? 0 : median(offs);
  };
  const unlike: UnlikePair[] = [];
  for (const rows of groups) {
    for (let j = 1; j < rows.length; j++) {
      const off = distance(rows[0], rows[j]);
      if (off < 0.1) continue;
      const better =
        suite.size > 5_000 || unlike.length > 20
          ? []
          : [rows[0], rows[j]].flatMap((row) => {
              let best = -1;
              let least = off / 3;
              for (let other = 0; other < suite.size; other++) {
                if (other === rows[0] || other === rows[j]) continue;
                const far = distance(row, other);
                if (far > 0 && far < least) {
                  best = other;
                  least = far;
                }
              }
              return best < 0 ? [] : [`row ${row + 1} is much closer to row ${best + 1} "${suite.samples[best]}"`];
            });
      const sample = suite.samples[rows[0]];
      unlike.push({
        rows: [rows[0], rows[j]],
        sample,
        words: `rows ${rows[0] + 1} and ${rows[j] + 1} "${sample}" differ typically by ${Math.round(100 * (Math.exp(off) - 1))} %: not the same sample${better.length > 0 ? ` (${better.join('; ')})` : ''}`,
      });
    }
  }
  return unlike;
}
