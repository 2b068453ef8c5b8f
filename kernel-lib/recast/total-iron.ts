import { cellState, column, resolveColumn, step, type Column, type Suite } from '../suite';
import { massFactor } from '../tables';

// Read once: looked up through a module in a hot loop it costs as much as the loop.
const { derived, missing } = cellState;

/** How the total iron of each row was found; one count for each way. */
export interface TotalIronCounts {
  /** A total was reported (FeOT or Fe2O3T). */
  readonly reportedTotal: number;
  /** FeO and Fe2O3 were both measured, and summed. */
  readonly summed: number;
  /** Fe2O3 alone was reported and taken as total iron. */
  readonly ferricAlone: number;
  /** FeO alone was reported and taken as total iron. */
  readonly ferrousAlone: number;
  /** No usable iron. */
  readonly none: number;
}

/**
 * Total iron as FeO for every row, decided row by row: a reported total (`FeOT`, `Fe2O3T`) wins; `FeO` and `Fe2O3` both measured are
 * summed; a row with one of them alone is taken as total iron, and counted as such. Common practice in compiling published analyses.
 *
 * @param suite n samples
 * @returns `column`: FeOT in wt % (n; NaN where there is no usable iron; a below-detection or above-range total keeps its limit), `counts`
 *   of how it was found
 */
export function totalIron(suite: Suite): { readonly column: Column; readonly counts: TotalIronCounts } {
  const total = resolveColumn(suite, 'FeOT');
  const ferrous = suite.columns.get('FeO');
  const ferric = suite.columns.get('Fe2O3');
  const toFerrous = massFactor('Fe2O3', 'FeO');
  const size = suite.size;
  const values = new Float64Array(size).fill(NaN);
  const states = new Uint8Array(size).fill(missing);
  const limits = total?.limits === undefined ? undefined : new Float64Array(size).fill(NaN);
  const sigma = [total, ferrous, ferric].some((each) => each?.sigma !== undefined) ? new Float64Array(size).fill(NaN) : undefined;
  const usable = (each: Column | undefined, i: number) => each !== undefined && Number.isFinite(each.values[i]);
  const counts = { reportedTotal: 0, summed: 0, ferricAlone: 0, ferrousAlone: 0, none: 0 };
  for (let i = 0; i < size; i++) {
    if (total !== undefined && total.states[i] !== missing) {
      values[i] = total.values[i];
      states[i] = total.states[i];
      if (limits !== undefined) limits[i] = total.limits![i];
      if (sigma !== undefined) sigma[i] = total.sigma?.[i] ?? NaN;
      counts[usable(total, i) ? 'reportedTotal' : 'none']++;
      continue;
    }
    const hasFerrous = usable(ferrous, i);
    const hasFerric = usable(ferric, i);
    if (!hasFerrous && !hasFerric) {
      counts.none++;
      continue;
    }
    values[i] = (hasFerrous ? ferrous!.values[i] : 0) + (hasFerric ? ferric!.values[i] * toFerrous : 0);
    states[i] = derived;
    if (sigma !== undefined) {
      sigma[i] = Math.hypot(hasFerrous ? (ferrous!.sigma?.[i] ?? NaN) : 0, hasFerric ? (ferric!.sigma?.[i] ?? NaN) * toFerrous : 0);
    }
    counts[hasFerrous && hasFerric ? 'summed' : hasFerric ? 'ferricAlone' : 'ferrousAlone']++;
  }
  return { column: column({ symbol: 'FeOT', values, states, limits, sigma }), counts };
}

/** The suite with total iron as `FeOT` (wt %) for every row that has any; how it was found is in the lineage. */
export function withTotalIron(suite: Suite): Suite {
  const { column: iron, counts } = totalIron(suite);
  return suite.with([iron], step('withTotalIron', { ...counts }, { tables: ['atomic-weights.csv'] }));
}
