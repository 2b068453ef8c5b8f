import { cellState, resolveColumn, type Column, type Suite } from '../../suite';
import { atomicWeight } from '../../tables';

/** Sums of the analyses, in wt %; NaN where a sum means nothing because a major oxide is missing. */
export interface Totals {
  /** Major oxides, iron as reported. */
  readonly oxides: Float64Array;
  /** Major oxides with LOI (or H2O and CO2), and F and Cl less their oxygen where there is no LOI. */
  readonly withVolatiles: Float64Array;
  /** Oxygen that F and Cl stand for. */
  readonly oxygenOfHalogens: Float64Array;
  /** How many of the needed major oxides each sample has. */
  readonly measured: Uint8Array;
  readonly verdict: readonly ('in window' | 'low' | 'high' | 'not determined')[];
  readonly words: readonly string[];
  readonly window: { readonly from: number; readonly to: number };
}

const needed = ['SiO2', 'Al2O3', 'MgO', 'CaO', 'Na2O', 'K2O'] as const;
const others = ['TiO2', 'MnO', 'P2O5', 'Cr2O3', 'SO3'] as const;

const usable = (column: Column | undefined, i: number): number => (column !== undefined && Number.isFinite(column.values[i]) ? column.values[i] : 0);

/**
 * Sums every analysis: oxides with iron as it was reported, then with volatiles.
 *
 * @param window totals in it pass (default 98 to 102 wt %: common practice)
 */
export function analysisTotals(suite: Suite, window: { readonly from: number; readonly to: number }): Totals {
  const { size } = suite;
  const get = (symbol: string) => suite.columns.get(symbol);
  const majors = new Map(needed.map((oxide) => [oxide, resolveColumn(suite, oxide)]));
  const minors = others.map((oxide) => (oxide === 'TiO2' || oxide === 'MnO' || oxide === 'P2O5' ? resolveColumn(suite, oxide) : get(oxide)));
  const iron = ironAsReported(suite);
  const [loi, water, plus, minus, carbon, fluorine, chlorine] = ['LOI', 'H2O', 'H2O+', 'H2O-', 'CO2', 'F', 'Cl'].map(get);
  const perF = atomicWeight('O') / (2 * atomicWeight('F'));
  const perCl = atomicWeight('O') / (2 * atomicWeight('Cl'));
  const oxides = new Float64Array(size);
  const withVolatiles = new Float64Array(size);
  const oxygenOfHalogens = new Float64Array(size);
  const measured = new Uint8Array(size);
  const verdict: Totals['verdict'][number][] = [];
  const words: string[] = [];
  for (let i = 0; i < size; i++) {
    const lacking = needed.filter(
      (oxide) =>
        majors.get(oxide) === undefined ||
        majors.get(oxide)!.states[i] === cellState.missing ||
        majors.get(oxide)!.states[i] === cellState.aboveRange,
    );
    measured[i] = needed.length - lacking.length;
    if (Number.isNaN(iron[i])) lacking.push('iron' as 'SiO2');
    if (lacking.length > 0) {
      oxides[i] = withVolatiles[i] = NaN;
      verdict.push('not determined');
      words.push(`total not determined: needs ${lacking.join(', ')}`);
      continue;
    }
    let sum = iron[i];
    for (const column of majors.values()) sum += usable(column, i);
    for (const column of minors) sum += usable(column, i);
    oxides[i] = sum;
    const halogens = (usable(fluorine, i) + usable(chlorine, i)) / 1e4;
    oxygenOfHalogens[i] = (usable(fluorine, i) * perF + usable(chlorine, i) * perCl) / 1e4;
    const hasLoi = loi !== undefined && Number.isFinite(loi.values[i]);
    const bound = usable(plus, i) + usable(minus, i);
    sum += hasLoi ? loi.values[i] : (bound > 0 ? bound : usable(water, i)) + usable(carbon, i) + halogens - oxygenOfHalogens[i];
    withVolatiles[i] = sum;
    const volatiles = hasLoi || bound > 0 || usable(water, i) > 0;
    // Without any measured volatiles a low sum says nothing.
    const outcome = sum > window.to ? 'high' : sum < window.from ? (volatiles ? 'low' : sum < window.from - 4 ? 'low' : 'in window') : 'in window';
    verdict.push(outcome);
    words.push(outcome === 'in window' ? '' : `total ${sum.toFixed(2)} wt % is ${outcome}`);
  }
  return { oxides, withVolatiles, oxygenOfHalogens, measured, verdict, words, window };
}

/** Iron in the form in which it was reported: that is the form that makes a laboratory's total. */
function ironAsReported(suite: Suite): Float64Array {
  const [ferricTotal, ferrousTotal, ferrous, ferric] = ['Fe2O3T', 'FeOT', 'FeO', 'Fe2O3'].map((symbol) => suite.columns.get(symbol));
  const iron = new Float64Array(suite.size).fill(NaN);
  const measured = (column: Column | undefined, i: number) =>
    column !== undefined && Number.isFinite(column.values[i]) && column.states[i] === cellState.measured;
  for (let i = 0; i < iron.length; i++) {
    if (measured(ferric, i) && measured(ferrous, i)) iron[i] = ferric!.values[i] + ferrous!.values[i];
    else if (measured(ferricTotal, i)) iron[i] = ferricTotal!.values[i];
    else if (measured(ferrousTotal, i)) iron[i] = ferrousTotal!.values[i];
    else if (measured(ferric, i)) iron[i] = ferric!.values[i];
    else if (measured(ferrous, i)) iron[i] = ferrous!.values[i];
    else if (ferricTotal !== undefined && Number.isFinite(ferricTotal.values[i])) iron[i] = ferricTotal.values[i];
    else if (ferrousTotal !== undefined && Number.isFinite(ferrousTotal.values[i])) iron[i] = ferrousTotal.values[i];
  }
  return iron;
}
