import { findAnalyte, isMassUnit, massUnitFactor, type AnalyteKind } from '../chemistry';

/**
 * Why a cell holds what it holds. A cell without a usable value is NaN, and its state says why:
 * 0 measured · 1 below detection (the limit is kept) · 2 above range (the limit is kept) · 3 missing · 4 derived (computed, not measured).
 */
export const cellState = { measured: 0, belowDetection: 1, aboveRange: 2, missing: 3, derived: 4 } as const;

/** Names of the cell states, by number, for reports. */
export const cellStateNames = ['measured', 'below detection', 'above range', 'missing', 'derived'] as const;

/**
 * One quantity for every sample of a suite: typed arrays of equal length. Columns are never changed in place; treat the arrays as
 * read-only.
 */
export interface Column {
  readonly symbol: string;
  readonly kind: AnalyteKind;
  /** `wt%` for oxides, `ppm` for elements, '' for a bare number, or any other unit written out. */
  readonly unit: string;
  /** NaN wherever the state is below detection, above range or missing. */
  readonly values: Float64Array;
  /** One number of `cellState` a cell. */
  readonly states: Uint8Array;
  /** Detection or range limit of the cells that are below detection or above range, in `unit`; NaN elsewhere. */
  readonly limits?: Float64Array;
  /** Absolute 1σ in `unit`; NaN where it is not known. */
  readonly sigma?: Float64Array;
}

/** What `column` takes: values alone, or values with states, limits and 1σ. */
export interface ColumnInput {
  readonly symbol: string;
  readonly values: ArrayLike<number>;
  readonly unit?: string;
  readonly kind?: AnalyteKind;
  readonly states?: Uint8Array;
  readonly limits?: Float64Array;
  readonly sigma?: ArrayLike<number>;
}

/**
 * Makes a column. Without states, a finite value is `measured` and anything else `missing`.
 *
 * @param input symbol; values (n); unit (default: the analyte's own: oxides wt %, elements ppm); states (n); limits (n); sigma (n, absolute 1σ)
 * @throws RangeError when the arrays differ in length
 * @example column({ symbol: 'Ba', values: [210, 340, NaN] })
 */
export function column(input: ColumnInput): Column {
  const { symbol, limits } = input;
  const known = findAnalyte(symbol);
  const values = input.values instanceof Float64Array ? input.values : Float64Array.from(input.values);
  const sigma = input.sigma === undefined || input.sigma instanceof Float64Array ? input.sigma : Float64Array.from(input.sigma);
  for (const [name, array] of Object.entries({ states: input.states, limits, sigma })) {
    if (array !== undefined && array.length !== values.length) {
      throw new RangeError(`Column ${symbol}: ${name} has ${array.length} cells, values has ${values.length}; give one of each a sample.`);
    }
  }
  const states = input.states ?? measuredStates(values);
  return {
    symbol,
    kind: input.kind ?? known?.kind ?? 'quantity',
    unit: input.unit ?? known?.unit ?? '',
    values,
    states,
    ...(limits === undefined ? {} : { limits }),
    ...(sigma === undefined ? {} : { sigma }),
  };
}

function measuredStates(values: Float64Array): Uint8Array {
  const { measured, missing } = cellState;
  const states = new Uint8Array(values.length);
  for (let i = 0; i < values.length; i++) states[i] = Number.isFinite(values[i]) ? measured : missing;
  return states;
}

/** A column of computed values: finite is `derived`, anything else `missing` and NaN. The array is taken over. */
export function derivedColumn(symbol: string, values: Float64Array, unit: string, sigma?: Float64Array, kind: AnalyteKind = 'quantity'): Column {
  const states = new Uint8Array(values.length);
  for (let i = 0; i < values.length; i++) {
    if (Number.isFinite(values[i])) states[i] = cellState.derived;
    else {
      states[i] = cellState.missing;
      values[i] = NaN;
    }
  }
  return sigma === undefined ? { symbol, kind, unit, values, states } : { symbol, kind, unit, values, states, sigma };
}

/** The cells of the given rows, in that order. */
export function gatherColumn(from: Column, rows: ArrayLike<number>): Column {
  const pick = <Numbers extends Float64Array | Uint8Array>(source: Numbers, target: Numbers): Numbers => {
    for (let i = 0; i < rows.length; i++) target[i] = source[rows[i]];
    return target;
  };
  return {
    ...from,
    values: pick(from.values, new Float64Array(rows.length)),
    states: pick(from.states, new Uint8Array(rows.length)),
    ...(from.limits === undefined ? {} : { limits: pick(from.limits, new Float64Array(rows.length)) }),
    ...(from.sigma === undefined ? {} : { sigma: pick(from.sigma, new Float64Array(rows.length)) }),
  };
}

/** Every number of the column times a factor, under a new symbol and unit; measured cells become derived. */
export function scaleColumn(from: Column, factor: number, as: { symbol: string; kind: AnalyteKind; unit: string }): Column {
  const times = (source: Float64Array) => source.map((value) => value * factor);
  return {
    ...as,
    values: times(from.values),
    states: from.states.map((state) => (state === cellState.measured ? cellState.derived : state)),
    ...(from.limits === undefined ? {} : { limits: times(from.limits) }),
    ...(from.sigma === undefined ? {} : { sigma: times(from.sigma) }),
  };
}

/**
 * The column in another mass unit (`wt%`, `ppm`, `ppb`, `ppt`).
 *
 * @throws RangeError when either unit is not a mass fraction
 */
export function columnIn(from: Column, unit: string): Column {
  if (from.unit === unit) return from;
  if (!isMassUnit(from.unit) || !isMassUnit(unit)) throw new RangeError(`Column ${from.symbol} is in "${from.unit}", which cannot be converted to "${unit}".`);
  const converted = scaleColumn(from, massUnitFactor(from.unit, unit), { symbol: from.symbol, kind: from.kind, unit });
  return { ...converted, states: from.states };
}

/** How many cells are in each state, by the state's number. */
export function countStates(of: Column): readonly number[] {
  const counts = cellStateNames.map(() => 0);
  for (let i = 0; i < of.states.length; i++) counts[of.states[i]]++;
  return counts;
}
