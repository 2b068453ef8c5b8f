import { findAnalyte, massUnitFactor } from '../chemistry';
import { equivalentSymbols, massFactor } from '../tables';
import { cellState, scaleColumn, type Column } from './column';
import type { Suite } from './suite';

const resolved = new WeakMap<Suite, Map<string, Column | undefined>>();

/**
 * The column of a quantity, from whichever form of it the suite holds: itself, and where it has no cell, its equivalent (`Ti` from
 * `TiO2`, `FeOT` from `Fe2O3T`), converted exactly. Cells that came by conversion are `derived`.
 *
 * @param suite n samples
 * @param symbol canonical symbol
 * @returns the column in the symbol's canonical unit, or undefined when the suite holds no form of it
 */
export function resolveColumn(suite: Suite, symbol: string): Column | undefined {
  let known = resolved.get(suite);
  if (known === undefined) resolved.set(suite, (known = new Map()));
  if (!known.has(symbol)) known.set(symbol, gather(suite, symbol));
  return known.get(symbol);
}

function gather(suite: Suite, symbol: string): Column | undefined {
  let best = suite.columns.get(symbol);
  for (const other of equivalentSymbols(symbol)) {
    const from = suite.columns.get(other);
    if (from === undefined) continue;
    if (best !== undefined && !best.states.includes(cellState.missing)) break;
    const { kind, unit } = findAnalyte(symbol)!;
    const converted = scaleColumn(from, massFactor(other, symbol) * massUnitFactor(from.unit as 'wt%', unit as 'ppm'), { symbol, kind, unit });
    best = best === undefined ? converted : fillMissing(best, converted);
  }
  return best;
}

/** `first` with its missing cells taken from `second` (same symbol and unit). */
export function fillMissing(first: Column, second: Column): Column {
  const values = first.values.slice();
  const states = first.states.slice();
  const blank = () => new Float64Array(values.length).fill(NaN);
  const limits = first.limits?.slice() ?? (second.limits === undefined ? undefined : blank());
  const sigma = first.sigma?.slice() ?? (second.sigma === undefined ? undefined : blank());
  for (let i = 0; i < values.length; i++) {
    if (states[i] !== cellState.missing || second.states[i] === cellState.missing) continue;
    values[i] = second.values[i];
    states[i] = second.states[i];
    if (limits !== undefined) limits[i] = second.limits?.[i] ?? NaN;
    if (sigma !== undefined) sigma[i] = second.sigma?.[i] ?? NaN;
  }
  return { ...first, values, states, ...(limits === undefined ? {} : { limits }), ...(sigma === undefined ? {} : { sigma }) };
}
