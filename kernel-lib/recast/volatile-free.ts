import { cellState, column, derivedColumn, resolveColumn, step, suiteOf, type Column, type Suite } from '../suite';
import { massFactor } from '../tables';
import { totalIron } from './total-iron';

// Read once: looked up through a module in a hot loop it costs as much as the loop.
const { derived, measured, missing } = cellState;

/** How iron enters the volatile-free sum. */
export type IronBasis = 'total-as-FeO' | 'total-as-Fe2O3' | 'measured';

const ironInWords: Readonly<Record<IronBasis, string>> = {
  'total-as-FeO': 'total iron as FeO',
  'total-as-Fe2O3': 'total iron as Fe2O3',
  measured: 'FeO and Fe2O3 as measured where both were, else total iron as FeO',
};

/** The oxides of the sum besides iron. All but silica may be missing: a missing one adds nothing, and the row is counted as incomplete. */
const sumOxides = ['SiO2', 'TiO2', 'Al2O3', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'] as const;

/** Without these a sum to 100 % means nothing, so the row gets none. */
const neededOxides = new Set<string>(['SiO2', 'Al2O3', 'MgO', 'CaO', 'Na2O', 'K2O']);

/**
 * Recasts the major oxides to 100 % free of volatiles (H2O, CO2, LOI): the basis on which lavas are compared and named.
 *
 * A row without a usable SiO2, Al2O3, MgO, CaO, Na2O, K2O or iron has no sum, so its recast cells are missing; a missing TiO2, MnO or
 * P2O5 adds nothing to the sum and is counted in the lineage. Below-detection oxides add nothing to the sum and keep their limit, recast.
 * Trace elements, isotope ratios and labels are unchanged. 1σ of each oxide is propagated with the sum's own error: errors are those of the
 * analysis, so a recast silica is better known than its parts.
 *
 * @param suite n samples with major oxides in wt %
 * @param options `iron`: `total-as-FeO` (default), `total-as-Fe2O3`, or `measured` (FeO and Fe2O3 kept where both are measured, else
 *   total as FeO)
 * @returns the suite with recast oxides (wt %, sum 100) and `SumAsGiven` (wt %: the sum before recasting, with its 1σ)
 * @throws RangeError for an unknown option
 * @source Le Maitre et al. 2002 (recalculation to 100 % free of H2O and CO2)
 * @example volatileFree(suite, { iron: 'total-as-FeO' }).values('SiO2')
 */
export function volatileFree(suite: Suite, options: { readonly iron?: IronBasis } = {}): Suite {
  const { iron = 'total-as-FeO' } = options;
  if (iron !== 'total-as-FeO' && iron !== 'total-as-Fe2O3' && iron !== 'measured') {
    throw new RangeError(`volatileFree: iron must be "total-as-FeO", "total-as-Fe2O3" or "measured", not "${String(iron)}".`);
  }
  const size = suite.size;
  const { column: allIron, counts } = totalIron(suite);
  const parts = new Map<string, Column>();
  for (const oxide of sumOxides) {
    const found = resolveColumn(suite, oxide);
    if (found !== undefined) parts.set(oxide, found);
  }
  const lacking = [...neededOxides].filter((oxide) => !parts.has(oxide));
  for (const [symbol, part] of ironColumns(suite, allIron, iron)) parts.set(symbol, part);

  const sum = new Float64Array(size);
  const usable = new Uint8Array(size).fill(lacking.length === 0 ? 1 : 0);
  for (let i = 0; i < size; i++) if (!Number.isFinite(allIron.values[i])) usable[i] = 0;
  let incomplete = 0;
  const gaps = new Uint8Array(size);
  for (const [symbol, { values, states }] of parts) {
    const needed = neededOxides.has(symbol);
    const isIron = symbol.startsWith('Fe');
    for (let i = 0; i < size; i++) {
      if (Number.isFinite(values[i])) sum[i] += values[i];
      else if (needed) usable[i] = 0;
      else if (!isIron && states[i] === missing) gaps[i] = 1;
    }
  }
  for (let i = 0; i < size; i++) {
    if (usable[i] === 0 || !(sum[i] > 0)) sum[i] = NaN;
    else incomplete += gaps[i];
  }
  const recast = [...parts.values()].map((part) => recastColumn(part, sum, parts));
  const sums = derivedColumn('SumAsGiven', sum, 'wt%', sumSigma(parts.values(), sum));
  const columns = new Map(suite.columns);
  for (const symbol of ['FeOT', 'Fe2O3T', 'FeO', 'Fe2O3']) columns.delete(symbol);
  for (const entry of [...recast, sums]) columns.set(entry.symbol, entry);
  const notRecast = size - sum.reduce((count, value) => count + (Number.isFinite(value) ? 1 : 0), 0);
  const because = step(
    'volatileFree',
    { iron, ironFound: { ...counts }, rows: size, notRecast, incompleteSums: incomplete },
    {
      sources: ['le_maitre_2002'],
      tables: ['atomic-weights.csv'],
      says: `Major oxides were recast to 100 % free of volatiles, with ${ironInWords[iron]}.`,
    },
  );
  return suiteOf({ columns: columns.values(), labels: suite.labels, lineage: [...suite.lineage, because] });
}

function ironColumns(suite: Suite, allIron: Column, iron: IronBasis): readonly (readonly [string, Column])[] {
  if (iron === 'total-as-FeO') return [['FeOT', allIron]];
  if (iron === 'total-as-Fe2O3') {
    const factor = massFactor('FeO', 'Fe2O3');
    const times = (values: Float64Array | undefined) => values?.map((value) => value * factor);
    return [['Fe2O3T', column({ symbol: 'Fe2O3T', values: times(allIron.values)!, states: allIron.states, limits: times(allIron.limits), sigma: times(allIron.sigma) })]];
  }
  const ferrous = suite.columns.get('FeO');
  const ferric = suite.columns.get('Fe2O3');
  const both = (i: number) => Number.isFinite(ferrous?.values[i]) && Number.isFinite(ferric?.values[i]);
  const where = (from: Column, symbol: string, keep: (i: number) => boolean): Column => {
    const states = from.states.map((state, i) => (keep(i) ? state : missing));
    const blank = (values: Float64Array | undefined) => values?.map((value, i) => (keep(i) ? value : NaN));
    return column({ symbol, values: blank(from.values)!, states, limits: blank(from.limits), sigma: blank(from.sigma) });
  };
  const total: readonly [string, Column] = ['FeOT', where(allIron, 'FeOT', (i) => !both(i))];
  if (ferrous === undefined || ferric === undefined) return [total];
  return [['FeO', where(ferrous, 'FeO', both)], ['Fe2O3', where(ferric, 'Fe2O3', both)], total];
}

/** 1σ of the sum: oxides are measured apart, so their errors add in squares; an oxide without one adds none. */
function sumSigma(parts: Iterable<Column>, sum: Float64Array): Float64Array | undefined {
  let variance: Float64Array | undefined;
  for (const { values, sigma } of parts) {
    if (sigma === undefined) continue;
    variance ??= new Float64Array(sum.length);
    for (let i = 0; i < sum.length; i++) if (Number.isFinite(values[i]) && sigma[i] > 0) variance[i] += sigma[i] ** 2;
  }
  return variance?.map((each, i) => (Number.isFinite(sum[i]) ? Math.sqrt(each) : NaN));
}

/** value × 100 / sum for every cell, with limits likewise and 1σ propagated through the sum. */
function recastColumn(part: Column, sum: Float64Array, parts: ReadonlyMap<string, Column>): Column {
  const size = sum.length;
  const values = new Float64Array(size);
  const states = new Uint8Array(size);
  const limits = part.limits === undefined ? undefined : new Float64Array(size);
  const sigma = part.sigma === undefined ? undefined : new Float64Array(size);
  for (let i = 0; i < size; i++) {
    const factor = 100 / sum[i];
    values[i] = part.values[i] * factor;
    if (limits !== undefined) limits[i] = part.limits![i] * factor;
    states[i] = Number.isNaN(factor) ? missing : part.states[i] === measured ? derived : part.states[i];
  }
  if (sigma !== undefined) {
    // x' = 100·x/S: the error of x enters both x and S, the errors of the other oxides only S.
    const others = new Float64Array(size);
    for (const other of parts.values()) {
      if (other === part || other.sigma === undefined) continue;
      for (let i = 0; i < size; i++) if (Number.isFinite(other.values[i]) && other.sigma[i] > 0) others[i] += other.sigma[i] ** 2;
    }
    for (let i = 0; i < size; i++) {
      const share = part.values[i] / sum[i];
      sigma[i] = (100 / sum[i]) * Math.sqrt(((1 - share) * part.sigma![i]) ** 2 + share ** 2 * others[i]);
    }
  }
  return column({ symbol: part.symbol, values, states, limits, sigma });
}
