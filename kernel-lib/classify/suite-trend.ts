import { seededRandom } from '../chemistry';
import { formatNumber, showAs, type Showable } from '../display';
import { step, type Step, type Suite } from '../suite';
import { operandsOf, type IronBasis } from './axes';
import { findScheme } from './catalogue';
import { classifyOptions } from './classify';
import { groupRows } from './groups';

/** How `suiteTrend` works. */
export interface TrendOptions {
  /** Label whose groups are judged apart, e.g. `volcano` (default: the whole suite as one). */
  readonly group?: string;
  readonly iron?: IronBasis;
  /** Samples of more MgO (wt %, volatile-free) are left out: they may hold accumulated crystals (default 8). */
  readonly mostMagnesia?: number;
  /** Resamplings for the intervals (default 1000). */
  readonly draws?: number;
  readonly seed?: number;
}

/** A number with its 95 % interval from resampling the samples. */
export interface TrendValue {
  readonly value: number;
  readonly low: number;
  readonly high: number;
}

/** The trend of one group. */
export interface SuiteTrendGroup {
  readonly group: string;
  /** Samples used. */
  readonly count: number;
  /** Rise of SiO2 (wt %) for one unit of FeOT/MgO, by reduced major axis; Miyashiro's line rises by 6.4. */
  readonly slope: TrendValue;
  /** Correlation of SiO2 and FeOT/MgO. */
  readonly correlation: number;
  /** Share of resamplings in which the trend is steeper than the line. */
  readonly steeper: number;
  readonly series: 'calc-alkalic' | 'tholeiitic' | 'not decided';
  readonly because: string;
  /** SiO2 (wt %) at which CaO equals Na2O + K2O: Peacock's alkali–lime index; NaN where the trend does not reach it. */
  readonly alkaliLime: TrendValue;
  readonly alkaliLimeClass: 'calcic' | 'calc-alkalic' | 'alkali-calcic' | 'alkalic' | 'not decided';
}

/** Trends by group. */
export interface SuiteTrend extends Showable {
  readonly groups: readonly SuiteTrendGroup[];
  readonly lineage: readonly Step[];
}

/** Fewest samples that make a trend, and least correlation: our own choice, stated with the result. */
const fewest = 5;
const leastCorrelation = 0.5;

/** Bounds of Peacock's classes, SiO2 in wt % (Peacock 1931). */
const peacock = { bounds: [51, 56, 61], names: ['alkalic', 'alkali-calcic', 'calc-alkalic', 'calcic'] } as const;

/**
 * The series of a suite by its trend, as Miyashiro (1974) defined it: a suite whose SiO2 rises faster with FeOT/MgO than his line is
 * calc-alkalic, one that rises slower is tholeiitic; single points only stand in for that. With it, Peacock's alkali–lime index.
 *
 * The trend is the reduced major axis of SiO2 on FeOT/MgO; its 95 % interval comes from resampling the samples (seeded). A group of fewer
 * than 5 samples, or whose correlation is below 0.5, or whose interval holds the slope of the line, is not decided.
 *
 * @param suite n samples with major oxides in wt %
 * @param options `group`, `iron`, `mostMagnesia`, `draws`, `seed`
 * @returns one entry a group
 * @throws RangeError for an unknown label or option
 * @source Miyashiro 1974; Peacock 1931
 * @example suiteTrend(suite, { group: 'volcano' })
 */
export function suiteTrend(suite: Suite, options: TrendOptions = {}): SuiteTrend {
  const { group, mostMagnesia = 8 } = options;
  const { iron, draws, seed } = classifyOptions({ iron: options.iron, draws: options.draws ?? 1000, seed: options.seed }, 'suiteTrend');
  if (!(mostMagnesia > 0)) throw new RangeError(`suiteTrend: mostMagnesia must be a positive number (wt %), not ${String(mostMagnesia)}.`);
  const operands = operandsOf(suite, iron);
  const none = new Float64Array(suite.size).fill(NaN);
  const on = (symbol: string) => operands.operand('volatile-free', symbol)?.values ?? none;
  const [silica, iron2, magnesia, lime, soda, potash] = ['SiO2', 'FeOT', 'MgO', 'CaO', 'Na2O', 'K2O'].map(on);
  const line = findScheme('iron-enrichment').lines.find(({ published }) => published)!.points;
  const lineSlope = (line[1][0] - line[0][0]) / (line[1][1] - line[0][1]);
  const { uniform } = seededRandom(seed, 'suiteTrend');
  const groups: SuiteTrendGroup[] = [];
  for (const [name, rows] of groupRows(suite, group)) {
    const used = rows.filter((i) => Number.isFinite(silica[i]) && Number.isFinite(iron2[i] / magnesia[i]) && magnesia[i] <= mostMagnesia);
    const x = Float64Array.from(used, (i) => iron2[i] / magnesia[i]);
    const y = Float64Array.from(used, (i) => silica[i]);
    const excess = Float64Array.from(used, (i) => soda[i] + potash[i] - lime[i]);
    groups.push(groupTrend(name, x, y, excess, lineSlope, draws, uniform));
  }
  const because = step(
    'suiteTrend',
    { group: group ?? null, iron, mostMagnesia, draws, seed, fewest, leastCorrelation },
    {
      sources: ['miyashiro_1974', 'peacock_1931'],
      tables: ['schemes/iron-enrichment.json'],
      says: 'The series of each suite was read from the slope of its trend in SiO2 against FeO*/MgO (Miyashiro 1974).',
    },
  );
  return showAs({ groups, lineage: [...operands.onBasis('volatile-free').lineage, because] }, trendTable);
}

function groupTrend(
  group: string,
  x: Float64Array,
  y: Float64Array,
  excess: Float64Array,
  lineSlope: number,
  draws: number,
  uniform: () => number,
): SuiteTrendGroup {
  const count = x.length;
  const all = Int32Array.from({ length: count }, (_, i) => i);
  const fit = majorAxis(x, y, all);
  const nothing: TrendValue = { value: NaN, low: NaN, high: NaN };
  if (count < fewest) {
    return {
      group,
      count,
      slope: { ...nothing, value: count > 2 ? fit.slope : NaN },
      correlation: fit.correlation,
      steeper: NaN,
      series: 'not decided',
      because: `fewer than ${fewest} samples`,
      alkaliLime: nothing,
      alkaliLimeClass: 'not decided',
    };
  }
  const slopes = new Float64Array(draws);
  const indexes = new Float64Array(draws);
  const picked = new Int32Array(count);
  for (let d = 0; d < draws; d++) {
    for (let i = 0; i < count; i++) picked[i] = Math.floor(uniform() * count);
    slopes[d] = majorAxis(x, y, picked).slope;
    indexes[d] = zeroCrossing(y, excess, picked);
  }
  const slope = interval(fit.slope, slopes);
  const steeper = slopes.reduce((sum, each) => sum + (each > lineSlope ? 1 : 0), 0) / draws;
  const three = (value: number) => formatNumber(Number(value.toPrecision(3)));
  const written = `${three(slope.value)} (${three(slope.low)} to ${three(slope.high)}) against ${three(lineSlope)}`;
  const falls = fit.correlation <= 0;
  const weak = Math.abs(fit.correlation) < leastCorrelation;
  const series = weak || falls ? 'not decided' : slope.low > lineSlope ? 'calc-alkalic' : slope.high < lineSlope ? 'tholeiitic' : 'not decided';
  const because = weak
    ? `SiO2 and FeO*/MgO hardly vary together (r ${fit.correlation.toFixed(2)})`
    : falls
      ? 'SiO2 does not rise with FeO*/MgO'
      : series === 'not decided'
        ? `the interval of the slope holds the line's: ${written}`
        : `slope ${written}`;
  const alkaliLime = interval(zeroCrossing(y, excess, all), indexes);
  return { group, count, slope, correlation: fit.correlation, steeper, series, because, alkaliLime, alkaliLimeClass: peacockClass(alkaliLime) };
}

/** Reduced major axis of y on x over the given rows. */
function majorAxis(x: Float64Array, y: Float64Array, rows: Int32Array): { slope: number; correlation: number } {
  let [mx, my, xx, yy, xy] = [0, 0, 0, 0, 0];
  for (const i of rows) {
    mx += x[i] / rows.length;
    my += y[i] / rows.length;
  }
  for (const i of rows) {
    xx += (x[i] - mx) ** 2;
    yy += (y[i] - my) ** 2;
    xy += (x[i] - mx) * (y[i] - my);
  }
  return { slope: Math.sign(xy) * Math.sqrt(yy / xx), correlation: xy / Math.sqrt(xx * yy) };
}

/** Silica at which Na2O + K2O − CaO, straight on silica, passes zero; NaN beyond the range of the samples by more than 5 %. */
function zeroCrossing(silica: Float64Array, excess: Float64Array, rows: Int32Array): number {
  let [n, mx, my, xx, xy, low, high] = [0, 0, 0, 0, 0, Infinity, -Infinity];
  for (const i of rows) {
    if (!Number.isFinite(excess[i])) continue;
    n++;
    mx += silica[i];
    my += excess[i];
    low = Math.min(low, silica[i]);
    high = Math.max(high, silica[i]);
  }
  mx /= n;
  my /= n;
  for (const i of rows) {
    if (!Number.isFinite(excess[i])) continue;
    xx += (silica[i] - mx) ** 2;
    xy += (silica[i] - mx) * (excess[i] - my);
  }
  const at = mx - my / (xy / xx);
  return xy > 0 && at >= low - 5 && at <= high + 5 ? at : NaN;
}

function interval(value: number, drawn: Float64Array): TrendValue {
  const sorted = drawn.filter(Number.isFinite).sort();
  if (sorted.length < drawn.length / 2) return { value, low: NaN, high: NaN };
  return { value, low: sorted[Math.floor(0.025 * (sorted.length - 1))], high: sorted[Math.ceil(0.975 * (sorted.length - 1))] };
}

function peacockClass({ value, low, high }: TrendValue): SuiteTrendGroup['alkaliLimeClass'] {
  if (![value, low, high].every(Number.isFinite)) return 'not decided';
  const at = (silica: number) => peacock.bounds.filter((bound) => silica >= bound).length;
  return at(low) === at(high) ? peacock.names[at(value)] : 'not decided';
}

function trendTable({ groups }: { readonly groups: readonly SuiteTrendGroup[] }) {
  const text = ({ value, low, high }: TrendValue, digits: number) =>
    Number.isNaN(value)
      ? ''
      : Number.isNaN(low)
        ? value.toFixed(digits)
        : `${value.toFixed(digits)} (${low.toFixed(digits)} to ${high.toFixed(digits)})`;
  return {
    title: 'Series by the trend of the suite',
    columns: ['group', 'samples', 'SiO2 per FeO*/MgO', 'series', 'because', 'alkali–lime index', 'class'],
    rows: groups.map(({ group, count, slope, series, because, alkaliLime, alkaliLimeClass }) => [
      group === '' ? 'all' : group,
      count,
      text(slope, 2),
      series,
      because,
      text(alkaliLime, 1),
      alkaliLimeClass,
    ]),
    notes: [
      'Slopes by reduced major axis; 95 % intervals from resampling.',
      'A trend steeper than the line of Miyashiro (1974), 6.4 % SiO2 for one unit of FeO*/MgO, is calc-alkalic.',
    ],
  };
}
