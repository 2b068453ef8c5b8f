import { resolveColumn, type Suite } from '../suite';

/** Ranges that a sample must lie in, ends included, by column: `{ MgO: { from: 4 } }` in the column's unit. */
export type SampleFilter = Readonly<Record<string, { readonly from?: number; readonly to?: number }>>;

/**
 * What counts as a basalt fit for source tracing when nothing is said: enough MgO that crystallisation has not changed ratios, and not
 * visibly altered. Common practice; settable.
 */
export const basaltFilter: SampleFilter = { MgO: { from: 4 }, LOI: { to: 4 } };

/** Which samples pass, and how many fail each range. */
export interface FilterOutcome {
  /** 1 where the sample passes. */
  readonly kept: Uint8Array;
  readonly keptCount: number;
  /** In words: `12 of 80 left out: MgO below 4`. */
  readonly notes: readonly string[];
}

/**
 * Tests each sample against the ranges. A sample without a value passes a range on LOI or any upper end (nothing speaks against it), but not a
 * lower end; a column that the suite does not hold is not asked. All of it is in the notes.
 */
export function applyFilter(caller: string, suite: Suite, filter: SampleFilter | 'none'): FilterOutcome {
  const kept = new Uint8Array(suite.size).fill(1);
  const notes: string[] = [];
  for (const [symbol, { from, to }] of Object.entries(filter === 'none' ? {} : filter)) {
    for (const end of [from, to])
      if (end !== undefined && !Number.isFinite(end))
        throw new RangeError(`${caller}: the range of ${symbol} in filter has an end of ${String(end)}; give numbers.`);
    const values = resolveColumn(suite, symbol)?.values;
    const words = [from === undefined ? '' : `below ${from}`, to === undefined ? '' : `above ${to}`].filter((text) => text !== '').join(' or ');
    if (values === undefined) {
      notes.push(`Not asked, because the suite has no ${symbol}: ${symbol} ${words}.`);
      continue;
    }
    let failed = 0;
    let unknown = 0;
    for (let i = 0; i < values.length; i++) {
      const value = values[i];
      if (Number.isNaN(value)) {
        if (from !== undefined) kept[i] = 0;
        unknown++;
      } else if ((from !== undefined && value < from) || (to !== undefined && value > to)) {
        kept[i] = 0;
        failed++;
      }
    }
    if (failed > 0) notes.push(`Left out: ${failed} with ${symbol} ${words}.`);
    if (unknown > 0) notes.push(`${unknown} without a usable ${symbol}: ${from === undefined ? 'kept' : 'left out'}.`);
  }
  return { kept, keptCount: kept.reduce((sum, each) => sum + each, 0), notes };
}
