import { cellState, type Column } from '../suite';

/** A quantile known exactly (`low` = `high`), or only between bounds because censored cells reach into it. */
export interface BoundedQuantile {
  readonly low: number;
  readonly high: number;
}

/**
 * Quantiles of some rows of a column that may hold below-detection and above-range cells: computed twice, with each censored cell at the
 * bottom and at the top of what it may be, so that a quantile is exact where both agree.
 *
 * @param from the column
 * @param rows which rows
 * @param levels quantile levels, 0–1; between order statistics linearly interpolated (Hyndman & Fan 1996, type 7)
 * @returns how many cells count (a value or a limit), and the bounds of each quantile in the column's unit
 */
export function censoredQuantiles(from: Column, rows: readonly number[], levels: readonly number[]): { count: number; quantiles: BoundedQuantile[] } {
  const lows: number[] = [];
  const highs: number[] = [];
  for (const row of rows) {
    const state = from.states[row];
    if (state === cellState.missing) continue;
    const limit = from.limits?.[row] ?? NaN;
    const value = from.values[row];
    lows.push(state === cellState.belowDetection ? 0 : state === cellState.aboveRange ? (Number.isNaN(limit) ? 0 : limit) : value);
    highs.push(state === cellState.belowDetection ? (Number.isNaN(limit) ? Infinity : limit) : state === cellState.aboveRange ? Infinity : value);
  }
  lows.sort((a, b) => a - b);
  highs.sort((a, b) => a - b);
  return { count: lows.length, quantiles: levels.map((level) => ({ low: quantileOfSorted(lows, level), high: quantileOfSorted(highs, level) })) };
}

/** Quantile of ascending numbers, linearly interpolated (type 7); NaN of none. */
export function quantileOfSorted(sorted: ArrayLike<number>, level: number): number {
  if (sorted.length === 0) return NaN;
  const at = (sorted.length - 1) * level;
  const below = Math.floor(at);
  const part = at - below;
  return part === 0 ? sorted[below] : sorted[below] + part * (sorted[below + 1] - sorted[below]);
}

/** Turns the median absolute deviation of normal data into σ, and the 1σ of a mean into that of a median. */
const madToSigma = 1.4826;
const medianOverMean = 1.2533;

/** 1σ of the median of some values, from their absolute deviations from it (in any order): scatter by the median deviation, over √n. */
export function medianError(deviations: readonly number[]): number {
  const sorted = [...deviations].sort((a, b) => a - b);
  return (medianOverMean * madToSigma * quantileOfSorted(sorted, 0.5)) / Math.sqrt(sorted.length);
}
