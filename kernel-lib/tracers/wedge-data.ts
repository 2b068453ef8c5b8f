import { cellState, resolveColumn, type Suite } from '../suite';
import { medianError, quantileOfSorted } from './censored-quantiles';

/** What one fit is fitted to: concentrations and their errors, on the natural logarithm. */
export interface WedgeObservation {
  readonly name: string;
  /** How many samples stand behind it. */
  readonly samples: number;
  readonly elements: readonly string[];
  /** ppm. */
  readonly observed: Float64Array;
  /** 1σ of ln(ppm). */
  readonly sigma: Float64Array;
  /** Elements asked for that have no usable value here. */
  readonly unused: readonly string[];
}

/**
 * Observations by sample, or by group as medians. The error of a value is its own 1σ, but never less than `error` (relative); that of a
 * group's median is its scatter (from the median absolute deviation) over √n, likewise never less than `error`.
 */
export function wedgeObservations(suite: Suite, elements: readonly string[], error: number, group: string | undefined): WedgeObservation[] {
  const columns = elements.map((element) => resolveColumn(suite, element));
  const one = (name: string, rows: readonly number[]): WedgeObservation => {
    const used: string[] = [];
    const unused: string[] = [];
    const observed: number[] = [];
    const sigma: number[] = [];
    columns.forEach((column, e) => {
      const usable = column === undefined ? [] : rows.filter((row) => column.values[row] > 0);
      const censored =
        column === undefined
          ? 0
          : rows.filter((row) => column.states[row] === cellState.belowDetection || column.states[row] === cellState.aboveRange).length;
      // A median over half-censored cells is no median: the element is left out and named.
      if (usable.length === 0 || censored > usable.length) {
        unused.push(elements[e]);
        return;
      }
      const values = usable.map((row) => column!.values[row]).sort((a, b) => a - b);
      const middle = quantileOfSorted(values, 0.5);
      used.push(elements[e]);
      observed.push(middle);
      if (usable.length === 1) {
        const own = (column!.sigma?.[usable[0]] ?? NaN) / middle;
        sigma.push(own > error ? own : error);
      } else {
        sigma.push(Math.max(error, medianError(values.map((value) => Math.abs(Math.log(value / middle))))));
      }
    });
    return { name, samples: rows.length, elements: used, observed: Float64Array.from(observed), sigma: Float64Array.from(sigma), unused };
  };
  if (group === undefined) return suite.samples.map((name, row) => one(name, [row]));
  const rows = new Map<string, number[]>();
  suite.label(group).forEach((text, i) => {
    const known = rows.get(text);
    if (known === undefined) rows.set(text, [i]);
    else known.push(i);
  });
  return [...rows].map(([name, members]) => one(name, members));
}
