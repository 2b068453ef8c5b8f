import { findAnalyte } from '../chemistry';
import { column, resolveColumn, Suite, suiteOf, step, type Step } from '../suite';

/** One analysis: a suite of one row, or plain numbers by analyte (oxides in wt %, elements in ppm, isotope ratios bare). */
export type Composition = Suite | Readonly<Record<string, number>>;

/**
 * @internal A composition as a suite of one row.
 *
 * @param who the public function that was called, and `argument` its argument, for the error
 */
export function oneAnalysis(from: Composition, who: string, argument: string): Suite {
  if (from instanceof Suite) {
    if (from.size !== 1) {
      throw new RangeError(
        `${who}: ${argument} must be one analysis, but this suite has ${from.size} rows. Choose one with suite.sample('name') or suite.rows([0]).`,
      );
    }
    return from;
  }
  if (typeof from !== 'object' || from === null || Array.isArray(from)) {
    throw new TypeError(`${who}: ${argument} must be a suite of one row or an object of numbers by analyte, such as { SiO2: 50.1, Ba: 210 }.`);
  }
  const entries = Object.entries(from).filter(([, value]) => value !== undefined);
  if (entries.length === 0) throw new RangeError(`${who}: ${argument} holds no analyte.`);
  for (const [symbol, value] of entries) {
    const kind = findAnalyte(symbol)?.kind ?? 'quantity';
    if (typeof value !== 'number' || !Number.isFinite(value) || (kind !== 'quantity' && value < 0)) {
      throw new RangeError(`${who}: ${argument}.${symbol} is ${String(value)}; give a number of zero or more (oxides in wt %, elements in ppm).`);
    }
  }
  return suiteOf({
    columns: entries.map(([symbol, value]) => column({ symbol, values: [value] })),
    labels: { sample: [argument] },
    lineage: [step('composition', { given: Object.fromEntries(entries) })],
  });
}

/** @internal The value of an analyte in one analysis, from whichever form it holds; NaN where there is none. */
export function amountOf(analysis: Suite, symbol: string): number {
  return resolveColumn(analysis, symbol)?.values[0] ?? NaN;
}

/** @internal The absolute 1σ of an analyte in one analysis; NaN where it is not known. */
export function errorOf(analysis: Suite, symbol: string): number {
  return resolveColumn(analysis, symbol)?.sigma?.[0] ?? NaN;
}

/** @internal The steps of several inputs, in order, without repeats. */
export function joinLineage(...of: readonly (readonly Step[])[]): readonly Step[] {
  return [...new Set(of.flat())];
}
