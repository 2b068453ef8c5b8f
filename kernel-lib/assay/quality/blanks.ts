import { findAnalyte } from '../../chemistry';
import { cellState, type Suite } from '../../suite';

/** Detection limit of one analyte from the blanks of the batch. */
export interface BlankLimit {
  readonly analyte: string;
  readonly blanks: number;
  readonly mean: number;
  /** Mean + 3 standard deviations of the blanks, in the column's unit; NaN for fewer than three measured blanks. */
  readonly limit: number;
  /** Samples whose value lies below that limit although it was reported as measured. */
  readonly samplesBelow: number;
}

/**
 * Detection limits from blanks: mean + 3 s.
 *
 * @source Long & Winefordner 1983 (the IUPAC definition)
 */
export function blankLimits(suite: Suite, blank: readonly boolean[]): BlankLimit[] {
  const rows = blank.flatMap((is, row) => (is ? [row] : []));
  if (rows.length === 0) return [];
  const found: BlankLimit[] = [];
  for (const { symbol, values, states } of suite.columns.values()) {
    if (findAnalyte(symbol) === undefined) continue;
    const measured = rows.map((row) => values[row]).filter(Number.isFinite);
    if (measured.length === 0) continue;
    const mean = measured.reduce((sum, value) => sum + value, 0) / measured.length;
    const spread = Math.sqrt(measured.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (measured.length - 1));
    const limit = measured.length >= 3 ? mean + 3 * spread : NaN;
    let samplesBelow = 0;
    for (let i = 0; i < values.length; i++) if (!blank[i] && states[i] === cellState.measured && values[i] < limit) samplesBelow++;
    found.push({ analyte: symbol, blanks: measured.length, mean, limit, samplesBelow });
  }
  return found;
}
