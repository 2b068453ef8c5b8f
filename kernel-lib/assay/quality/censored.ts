import { showAs, type Showable } from '../../display';
import { cellState, column, step, type Column, type Step, type Suite, type Traced } from '../../suite';
import { median } from './recoveries';

/** How `substitute` makes a number of a below-detection cell. */
export type SubstitutionRule = 'half-limit' | 'limit-over-root-two' | 'limit' | 'zero' | 'order-statistics';

const factors: Readonly<Record<string, number>> = { 'half-limit': 0.5, 'limit-over-root-two': Math.SQRT1_2, limit: 1, zero: 0 };

/**
 * Replaces below-detection cells by numbers: the only way in this library by which they become numbers. The cells become `derived` (keeping
 * their limit), and the lineage says how many were made in this way.
 *
 * `order-statistics` gives each column's cells the values that a lognormal distribution fitted to the measured ones predicts for them
 * (regression on order statistics); they are right as a set, not one by one. Cells without a known limit are left as they are.
 *
 * @param suite n samples
 * @param symbols the columns to do it in
 * @param rule see `SubstitutionRule`
 * @throws RangeError for an unknown column or rule, or `order-statistics` with fewer than five measured cells
 * @source Helsel & Cohn 1988; Helsel 2012
 * @example substitute(suite, ['Ta', 'Cs'], 'order-statistics')
 */
export function substitute(suite: Suite, symbols: readonly string[], rule: SubstitutionRule): Suite {
  if (rule !== 'order-statistics' && !Object.hasOwn(factors, rule)) {
    throw new RangeError(
      `substitute: rule must be ${[...Object.keys(factors), 'order-statistics'].map((each) => `"${each}"`).join(', ')}, not ${JSON.stringify(rule)}.`,
    );
  }
  if (!Array.isArray(symbols) || symbols.length === 0) throw new RangeError('substitute: symbols must be a list of column names, e.g. ["Ta"].');
  const made: Record<string, number> = {};
  const columns = symbols.map((symbol): Column => {
    const from = suite.column(symbol);
    const values = from.values.slice();
    const states = from.states.slice();
    const predicted = rule === 'order-statistics' ? orderStatistics(from).predicted : undefined;
    made[symbol] = 0;
    for (let i = 0; i < values.length; i++) {
      const limit = from.limits?.[i] ?? NaN;
      if (states[i] !== cellState.belowDetection || Number.isNaN(limit)) continue;
      values[i] = predicted?.get(i) ?? factors[rule] * limit;
      states[i] = cellState.derived;
      made[symbol]++;
    }
    return column({ ...from, values, states });
  });
  return suite.with(
    columns,
    step(
      'substitute',
      { rule, cells: made },
      {
        sources: ['helsel_2012', ...(rule === 'order-statistics' ? ['helsel_cohn_1988'] : [])],
        says: `Results below detection were replaced by ${rule.replaceAll('-', ' ')} (${Object.entries(made)
          .map(([symbol, cells]) => `${cells} in ${symbol}`)
          .join(', ')}).`,
      },
    ),
  );
}

/** Summary of a column that holds below-detection cells, in the column's unit. */
export interface CensoredSummary extends Traced, Showable {
  readonly symbol: string;
  readonly unit: string;
  readonly method: 'order-statistics' | 'kaplan-meier';
  readonly n: number;
  readonly below: number;
  readonly mean: number;
  readonly standardDeviation: number;
  readonly median: number;
  readonly quartiles: readonly [number, number];
  readonly note: string;
}

/**
 * Mean, standard deviation and quartiles of a column with below-detection cells, none of them replaced.
 *
 * `kaplan-meier` assumes no distribution: it needs half the cells measured for a median, and its mean is biased where the lowest limit is
 * below every measured value (said in `note`). `order-statistics` fits a lognormal distribution: it needs five measured cells and at most
 * 80 % below.
 *
 * @param suite n samples
 * @param symbol a column; cells above range or missing are left out
 * @throws RangeError for an unknown column or method, or too few measured cells
 * @source Kaplan & Meier 1958; Helsel & Cohn 1988; Helsel 2012
 * @example censoredSummary(suite, 'Ta', 'kaplan-meier').median
 */
export function censoredSummary(suite: Suite, symbol: string, method: 'order-statistics' | 'kaplan-meier' = 'kaplan-meier'): CensoredSummary {
  if (method !== 'order-statistics' && method !== 'kaplan-meier')
    throw new RangeError(`censoredSummary: method must be "order-statistics" or "kaplan-meier", not ${JSON.stringify(method)}.`);
  const of = suite.column(symbol);
  const summary = method === 'kaplan-meier' ? kaplanMeier(of) : ofOrderStatistics(of);
  const because: Step = step(
    'censoredSummary',
    { symbol, method, n: summary.n, below: summary.below },
    { sources: method === 'kaplan-meier' ? ['kaplan_meier_1958', 'helsel_2012'] : ['helsel_cohn_1988', 'helsel_2012'] },
  );
  const result = { symbol, unit: of.unit, method, ...summary, lineage: [...suite.lineage, because] };
  return showAs(result, () => ({
    title: `${symbol}${of.unit === '' ? '' : ` (${of.unit})`}, ${summary.below} of ${summary.n} below detection, by ${method.replace('-', ' ')}`,
    columns: ['mean', 'standard deviation', 'first quartile', 'median', 'third quartile'],
    rows: [[summary.mean, summary.standardDeviation, summary.quartiles[0], summary.median, summary.quartiles[1]]],
    notes: summary.note === '' ? [] : [summary.note],
  }));
}

type Summary = Pick<CensoredSummary, 'n' | 'below' | 'mean' | 'standardDeviation' | 'median' | 'quartiles' | 'note'>;

interface Cell {
  readonly row: number;
  readonly value: number;
  readonly below: boolean;
}

function cellsOf({ values, states, limits }: Column): Cell[] {
  const cells: Cell[] = [];
  for (let row = 0; row < values.length; row++) {
    if (Number.isFinite(values[row])) cells.push({ row, value: values[row], below: false });
    else if (states[row] === cellState.belowDetection && Number.isFinite(limits?.[row] ?? NaN)) cells.push({ row, value: limits![row], below: true });
  }
  return cells;
}

/**
 * Plotting positions for several detection limits (Helsel & Cohn 1988, after Hirsch & Stedinger), and the lognormal line through the
 * measured values against normal quantiles.
 */
function orderStatistics(of: Column): { predicted: Map<number, number>; cells: Cell[] } {
  const cells = cellsOf(of);
  const measured = cells.filter(({ below }) => !below).sort((a, b) => a.value - b.value);
  const below = cells.filter((cell) => cell.below);
  if (measured.length < 5 || measured.some(({ value }) => !(value > 0)))
    throw new RangeError(
      `${of.symbol}: regression on order statistics needs five measured values above zero; there are ${measured.filter(({ value }) => value > 0).length}.`,
    );
  if (below.length > 4 * measured.length)
    throw new RangeError(`${of.symbol}: more than 80 % of the cells are below detection, too many for regression on order statistics (Helsel 2012).`);
  const limits = [...new Set(below.map(({ value }) => value))].sort((a, b) => a - b);
  // exceed[j]: probability of exceeding limit j, from the highest limit down.
  const exceed = new Array<number>(limits.length + 1).fill(0);
  const inBand = (j: number) => measured.filter(({ value }) => value >= limits[j] && (j + 1 === limits.length || value < limits[j + 1]));
  const under = (j: number) => measured.filter(({ value }) => value < limits[j]).length + below.filter(({ value }) => value <= limits[j]).length;
  for (let j = limits.length - 1; j >= 0; j--) {
    const a = inBand(j).length;
    exceed[j] = exceed[j + 1] + (a + under(j) === 0 ? 0 : (a / (a + under(j))) * (1 - exceed[j + 1]));
  }
  const position = new Map<number, number>();
  const spread = (group: readonly Cell[], from: number, to: number) =>
    group.forEach(({ row }, k) => position.set(row, from + ((to - from) * (k + 1)) / (group.length + 1)));
  const first = measured.filter(({ value }) => limits.length === 0 || value < limits[0]);
  spread(first, 0, limits.length === 0 ? 1 : 1 - exceed[0]);
  limits.forEach((limit, j) => {
    spread(inBand(j), 1 - exceed[j], 1 - exceed[j + 1]);
    spread(
      below.filter(({ value }) => value === limit),
      0,
      1 - exceed[j],
    );
  });
  const x = measured.map(({ row }) => normalQuantile(position.get(row)!));
  const y = measured.map(({ value }) => Math.log(value));
  const mx = x.reduce((sum, each) => sum + each, 0) / x.length;
  const my = y.reduce((sum, each) => sum + each, 0) / y.length;
  const slope = x.reduce((sum, each, i) => sum + (each - mx) * (y[i] - my), 0) / x.reduce((sum, each) => sum + (each - mx) ** 2, 0);
  return { predicted: new Map(below.map(({ row }) => [row, Math.exp(my + slope * (normalQuantile(position.get(row)!) - mx))])), cells };
}

function ofOrderStatistics(of: Column): Summary {
  const { predicted, cells } = orderStatistics(of);
  const values = cells.map(({ row, value, below }) => (below ? predicted.get(row)! : value)).sort((a, b) => a - b);
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  const standardDeviation = Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1));
  const at = (share: number) => {
    const place = share * (values.length - 1);
    const low = Math.floor(place);
    return values[low] + (place - low) * ((values[low + 1] ?? values[low]) - values[low]);
  };
  return {
    n: values.length,
    below: predicted.size,
    mean,
    standardDeviation,
    median: median(values),
    quartiles: [at(0.25), at(0.75)],
    note: 'a lognormal distribution is assumed for the cells below detection',
  };
}

/** Kaplan–Meier for values known only to lie below a limit: the survival curve of the flipped data. */
function kaplanMeier(of: Column): Summary {
  const cells = cellsOf(of);
  const measured = cells.filter(({ below }) => !below);
  if (measured.length < 2) throw new RangeError(`${of.symbol}: a summary needs two measured values; there are ${measured.length}.`);
  const levels = [...new Set(measured.map(({ value }) => value))].sort((a, b) => b - a);
  // share[k]: probability of lying below level k (and so at the next lower one or less).
  let share = 1;
  const steps: { value: number; weight: number; below: number }[] = [];
  for (const level of levels) {
    // At risk: everything that can still lie at this level or under it.
    const atRisk = cells.filter(({ value, below }) => (below ? value <= level : value <= level)).length;
    const here = measured.filter(({ value }) => value === level).length;
    const next = share * (1 - here / atRisk);
    steps.push({ value: level, weight: share - next, below: next });
    share = next;
  }
  const rest = share;
  const lowest = Math.min(...cells.map(({ value }) => value));
  const all = rest > 1e-12 ? [...steps, { value: lowest, weight: rest, below: 0 }] : steps;
  const mean = all.reduce((sum, { value, weight }) => sum + value * weight, 0);
  const variance = all.reduce((sum, { value, weight }) => sum + weight * (value - mean) ** 2, 0);
  const quantile = (probability: number): number => {
    // The smallest level with at least that share at or below it.
    for (let k = steps.length - 1; k >= 0; k--) {
      const atOrBelow = k === 0 ? 1 : steps[k - 1].below;
      if (atOrBelow >= probability) return steps[k].below >= probability ? NaN : steps[k].value;
    }
    return NaN;
  };
  return {
    n: cells.length,
    below: cells.length - measured.length,
    mean,
    standardDeviation: Math.sqrt((variance * cells.length) / (cells.length - 1)),
    median: quantile(0.5),
    quartiles: [quantile(0.25), quantile(0.75)],
    note: rest > 1e-12 ? `${(100 * rest).toFixed(0)} % lie below the lowest measured value; the mean takes them at ${lowest}` : '',
  };
}

/** Quantile of the standard normal distribution (Acklam's rational approximation, relative error below 1.2e-9). */
export function normalQuantile(probability: number): number {
  if (!(probability > 0 && probability < 1)) throw new RangeError(`normalQuantile: probability must lie between 0 and 1, not ${probability}.`);
  const a = [-39.69683028665376, 220.9460984245205, -275.9285104469687, 138.357751867269, -30.66479806614716, 2.506628277459239];
  const b = [-54.47609879822406, 161.5858368580409, -155.6989798598866, 66.80131188771972, -13.28068155288572];
  const c = [-0.007784894002430293, -0.3223964580411365, -2.400758277161838, -2.549732539343734, 4.374664141464968, 2.938163982698783];
  const d = [0.007784695709041462, 0.3224671290700398, 2.445134137142996, 3.754408661907416];
  const tail = (q: number) =>
    (((((c[0] * q + c[1]) * q + c[2]) * q + c[3]) * q + c[4]) * q + c[5]) / ((((d[0] * q + d[1]) * q + d[2]) * q + d[3]) * q + 1);
  if (probability < 0.02425) return tail(Math.sqrt(-2 * Math.log(probability)));
  if (probability > 0.97575) return -tail(Math.sqrt(-2 * Math.log(1 - probability)));
  const q = probability - 0.5;
  const r = q * q;
  return (
    ((((((a[0] * r + a[1]) * r + a[2]) * r + a[3]) * r + a[4]) * r + a[5]) * q) / (((((b[0] * r + b[1]) * r + b[2]) * r + b[3]) * r + b[4]) * r + 1)
  );
}
