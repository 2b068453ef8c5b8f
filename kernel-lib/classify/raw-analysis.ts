import { isVolatileFree } from './axes';
import { column, suiteOf, type Column, type Suite } from '../suite';
import { equivalentSymbols } from '../tables';
import type { Uncertainty } from './probability';

/**
 * The analysis as it came from the laboratory, with its own 1σ: errors belong there, before any recasting. A suite that was recast is
 * turned back: value × sum / 100, and 1σ from the recast 1σ and that of the sum (the propagation through the sum is linear in the
 * variances, so it can be undone exactly).
 */
export function rawAnalysis(suite: Suite, uncertainty: Uncertainty): Suite {
  const raw = isVolatileFree(suite) ? turnedBack(suite) : suite;
  if (Object.keys(uncertainty).length === 0) return raw;
  const given = givenFor(raw, uncertainty);
  const columns = [...raw.columns.values()].map((each): Column => {
    const own = given.get(each.symbol);
    if (own === undefined) return each;
    const { relative = 0, absolute = 0 } = own;
    return { ...each, sigma: each.values.map((value) => Math.hypot(relative * value, absolute)) };
  });
  return suiteOf({ columns, labels: raw.labels, lineage: raw.lineage });
}

const ironForms = ['FeOT', 'Fe2O3T', 'FeO', 'Fe2O3'];

/**
 * The uncertainty of each column. One given for an analyte that the suite holds in another form (`TiO2` for `Ti`) goes to that form; one
 * of total iron also to measured FeO and Fe2O3, which the sum may be made of. A relative error is the same in every form; an absolute one
 * is not, so it stays with its own column.
 */
function givenFor(raw: Suite, uncertainty: Uncertainty): ReadonlyMap<string, { readonly relative?: number; readonly absolute?: number }> {
  const given = new Map(Object.entries(uncertainty).filter(([symbol]) => raw.has(symbol)));
  for (const [symbol, { relative, absolute }] of Object.entries(uncertainty)) {
    const forms = symbol === 'FeOT' || symbol === 'Fe2O3T' ? ironForms : equivalentSymbols(symbol);
    const others = forms.filter((form) => form !== symbol && raw.has(form));
    if (!raw.has(symbol) && (others.length === 0 || relative === undefined)) {
      const why =
        others.length === 0
          ? `the suite holds no ${symbol}`
          : `the suite holds ${others.join(', ')}, for which ${absolute} would mean something else: give { relative }`;
      throw new RangeError(`uncertainty of ${symbol}: ${why}. It holds: ${raw.analytes.join(', ')}.`);
    }
    if (relative === undefined) continue;
    for (const form of others) if (!given.has(form) && raw.column(form).sigma === undefined) given.set(form, { relative });
  }
  return given;
}

/** Oxides that a volatile-free sum is made of. */
export const sumOxides = ['SiO2', 'TiO2', 'Al2O3', 'FeOT', 'Fe2O3T', 'FeO', 'Fe2O3', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'];

function turnedBack(suite: Suite): Suite {
  const sum = suite.column('SumAsGiven');
  const parts = sumOxides.map((oxide) => suite.columns.get(oxide)).filter((each) => each !== undefined);
  const size = suite.size;
  const sigma = parts.map((part) => (part.sigma === undefined || sum.sigma === undefined ? undefined : new Float64Array(size)));
  for (let i = 0; i < size; i++) {
    const total = sum.values[i];
    const variance = (sum.sigma?.[i] ?? NaN) ** 2;
    let largest = 0;
    let others = 0;
    parts.forEach((part, j) => {
      if (part.values[i] > parts[largest].values[i] || !Number.isFinite(parts[largest].values[i])) largest = j;
      const into = sigma[j];
      if (into === undefined) return;
      const share = part.values[i] / 100;
      // recast variance · (sum/100)² = (1 − 2·share)·σ² + share²·(variance of the sum)
      const own = (((part.sigma![i] * total) / 100) ** 2 - share * share * variance) / (1 - 2 * share);
      into[i] = Math.sqrt(Math.max(0, own));
    });
    // The largest oxide may have a share of about a half, where that division fails: it gets what the others leave of the sum's variance.
    const into = sigma[largest];
    if (into === undefined) continue;
    parts.forEach((_, j) => {
      const each = sigma[j]?.[i] ?? 0;
      if (j !== largest && Number.isFinite(each)) others += each * each;
    });
    into[i] = Math.sqrt(Math.max(0, variance - others));
  }
  const back = parts.map((part, j) =>
    column({
      symbol: part.symbol,
      values: part.values.map((value, i) => (value * sum.values[i]) / 100),
      states: part.states,
      limits: part.limits?.map((limit, i) => (limit * sum.values[i]) / 100),
      ...(sigma[j] === undefined ? {} : { sigma: sigma[j] }),
    }),
  );
  const kept = [...suite.columns.values()].filter(({ symbol }) => symbol !== 'SumAsGiven' && !sumOxides.includes(symbol));
  return suiteOf({ columns: [...back, ...kept], labels: suite.labels, lineage: suite.lineage });
}
