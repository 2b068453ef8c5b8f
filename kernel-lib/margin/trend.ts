import { showAs, type Showable } from '../display';
import { step, type Step, type Suite } from '../suite';
import {
  compositionIndex,
  gatherGroups,
  groupValue,
  resampledValues,
  unfitGroup,
  type AtComposition,
  type CompositionIndex,
  type GroupSamples,
  type ArcValueOptions,
} from './at-composition';
import { kendall, medianOf, quantileOf, randomSource, robustLine, type Line, type RobustMethod } from './regression';
import { round } from './slab-below';

/** What trends are looked for against: columns that `slabBelow` and `withKinematics` join, or any other column. */
export type ArcTrendOptions = ArcValueOptions & {
  /** Column to read the trend against (default `SlabDepth`). */
  readonly against?: string;
  /** Draws of the bootstrap (default 2000). */
  readonly draws?: number;
  /** Share of draws inside the interval (default 0.95). */
  readonly confidence?: number;
};

/** One volcano in a trend. */
export interface ArcTrendPoint {
  readonly group: string;
  /** Median of the column read against, in its unit. */
  readonly x: number;
  readonly y: number;
  /** 1σ of y: spread of the bootstrap of the group's samples. */
  readonly ySigma: number;
  readonly used: number;
}

/** A trend, or its absence. */
export interface ArcTrend {
  readonly of: string;
  readonly against: string;
  readonly unit: string;
  readonly againstUnit: string;
  readonly by: string;
  readonly at?: AtComposition;
  readonly points: readonly ArcTrendPoint[];
  readonly line: Line;
  /** Interval of the slope. */
  readonly slopeInterval: readonly [number, number];
  readonly tau: number;
  readonly p: number;
  /** `trend`: the slope's interval leaves out zero and the order of the volcanoes is unlikely by chance; `weak`: only one of them; `none`. */
  readonly verdict: 'trend' | 'weak' | 'none';
  /** The verdict in one plain sentence. */
  readonly sentence: string;
  /** Interval of the line: x, low, high (m each), for drawing. */
  readonly band: { readonly x: Float64Array; readonly low: Float64Array; readonly high: Float64Array };
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/** Fewest volcanoes that a trend may be spoken of with: the order of four can never be told from chance at 5 %. */
const fewestGroups = 5;
const replicates = 300;

/**
 * Looks for a trend across or along an arc: one value a volcano against slab depth, thermal parameter, trench distance or any column.
 *
 * Volcanoes, not samples, are the points: many samples of one volcano say the same thing. The line is robust (Theil–Sen, or Huber); its
 * interval is a seeded bootstrap that draws residuals about the line, and each volcano's samples anew; Kendall's τ tells whether the order
 * alone could be chance. Both together give the verdict. A trend with slab depth is no proof of a cause, and slabs are not located from potash.
 *
 * @param suite n samples with the column read against, and a label that names the volcano
 * @param options `of` (an expression), `against`, `by`, `at`, `method`, `seed`, `draws`, `confidence`; or a ready-made index (`K60`, `K57.5`, `K55`,
 *   `Na6.0`, `Ca6.0`), with the other options as third argument
 * @returns points, line, interval, verdict and a plain sentence
 * @throws RangeError for fewer than five volcanoes with values, naming those left out and why; for unknown columns, labels or options
 * @source Theil 1950; Sen 1968; Kendall 1938; Efron 1979; Dickinson 1975
 * @example crossArcTrend(placed, { of: 'Ba/Th', against: 'SlabDepth' }).sentence
 */
export function crossArcTrend(
  suite: Suite,
  options: ArcTrendOptions | CompositionIndex,
  more: Omit<ArcTrendOptions, 'of' | 'at'> = {},
): ArcTrend & Showable {
  const wanted: ArcTrendOptions = typeof options === 'string' ? { ...compositionIndex(options), ...more } : options;
  const { of, by = 'volcano', at, against = 'SlabDepth', method = 'theil-sen', seed = 1967, draws = 2000, confidence = 0.95 } = wanted;
  if (!(Number.isInteger(draws) && draws >= 100 && draws <= 100_000))
    throw new RangeError(`crossArcTrend: draws must be a whole number from 100 to 100000, not ${String(draws)}.`);
  if (!(confidence > 0.5 && confidence < 1))
    throw new RangeError(`crossArcTrend: confidence must be a share such as 0.95, not ${String(confidence)}.`);
  if (!suite.has(against))
    throw new RangeError(
      `crossArcTrend: the suite has no column "${against}". It has: ${suite.analytes.join(', ')}. Slab columns come from slabBelow, the ` +
        'thermal parameter from withKinematics.',
    );
  const column = suite.column(against);
  const { samples, unit, notes } = gatherGroups(suite, wanted);
  const left: string[] = [];
  const used: { readonly samples: GroupSamples; readonly x: number; readonly y: number }[] = [];
  for (const each of samples) {
    const x = medianOf(each.rows.map((i) => column.values[i]));
    const unfit = Number.isFinite(x) ? unfitGroup(each, wanted) : `no ${against}`;
    if (unfit === undefined) used.push({ samples: each, x, y: groupValue(each.values, each.index, at, method) });
    else left.push(`${each.group} (${unfit})`);
  }
  if (left.length > 0)
    notes.push(`Not used: ${left.length > 12 ? `${left.slice(0, 12).join(', ')} and ${left.length - 12} more` : left.join(', ')}.`);
  if (used.length < fewestGroups) {
    throw new RangeError(
      `crossArcTrend: ${used.length} ${by === 'volcano' ? 'volcanoes have' : `groups by ${by} have`} both ${of} and ${against}; a trend ` +
        `needs ${fewestGroups}, because the order of fewer can always be chance. ` +
        `${left.length > 0 ? `Not used: ${left.slice(0, 12).join(', ')}.` : ''}`,
    );
  }
  const x = used.map((each) => each.x);
  const y = used.map((each) => each.y);
  const line = robustLine(method, x, y);
  if (Number.isNaN(line.slope))
    throw new RangeError(`crossArcTrend: ${against} is the same for all groups, so there is nothing to read a trend against.`);
  const boot = bootstrap(used, line, wanted, { method, seed, draws, confidence });
  const { tau, p } = kendall(x, y, seed);
  const clear = boot.slope[0] > 0 || boot.slope[1] < 0;
  const verdict = clear && p <= 0.05 ? 'trend' : clear || p <= 0.05 ? 'weak' : 'none';
  const points = used.map(
    (each, i): ArcTrendPoint => ({
      group: each.samples.group,
      x: each.x,
      y: each.y,
      ySigma: boot.sigma[i],
      used: each.samples.values.length,
    }),
  );
  notes.push(...spanNotes(x, column.sigma, against, column.unit));
  const sentence = plainSentence({
    of,
    at,
    against,
    unit,
    againstUnit: column.unit,
    line,
    interval: boot.slope,
    tau,
    p,
    verdict,
    count: used.length,
    by,
    confidence,
  });
  const result: ArcTrend = {
    of,
    against,
    unit,
    againstUnit: column.unit,
    by,
    ...(at === undefined ? {} : { at }),
    points,
    line,
    slopeInterval: boot.slope,
    tau,
    p,
    verdict,
    sentence,
    band: boot.band,
    notes,
    lineage: [
      ...suite.lineage,
      step(
        'crossArcTrend',
        {
          of,
          against,
          by,
          at: at === undefined ? null : { index: at.index, value: at.value, window: [...at.window] },
          method,
          seed,
          draws,
          confidence,
          groups: used.length,
          notUsed: left.length,
          verdict,
        },
        {
          sources: [
            'theil_1950',
            'sen_1968',
            'kendall_1938',
            'efron_1979',
            ...(method === 'huber' ? ['huber_1964'] : []),
            ...(at?.index === 'SiO2' ? ['dickinson_1975'] : []),
          ],
          says: sentence,
        },
      ),
    ],
  };
  return showAs(result, () => ({
    title: sentence,
    columns: [
      by,
      `${against}${column.unit === '' ? '' : ` (${column.unit})`}`,
      `${nameOf(of, at)}${unit === '' ? '' : ` (${unit})`}`,
      '1σ',
      'samples',
    ],
    rows: points.map((point) => [point.group, round(point.x, 2), Number(point.y.toPrecision(4)), Number(point.ySigma.toPrecision(3)), point.used]),
    notes,
  }));
}

/** @internal `K2O at 60 SiO2`, or the expression itself. */
export const nameOf = (of: string, at: AtComposition | undefined): string => (at === undefined ? of : `${of} at ${at.value} % ${at.index}`);

/**
 * Interval of the line. Residuals are drawn, not volcanoes: with five or ten of them, draws of volcanoes often hold only two places close together,
 * whose line can be anything. The samples of each volcano are drawn as well, so that a lucky fit of a few noisy values is not taken for certainty.
 */
function bootstrap(
  used: readonly { readonly samples: GroupSamples; readonly x: number; readonly y: number }[],
  line: Line,
  wanted: ArcTrendOptions,
  how: { readonly method: RobustMethod; readonly seed: number; readonly draws: number; readonly confidence: number },
) {
  const draw = randomSource(how.seed);
  const n = used.length;
  const values = used.map(({ samples }) => resampledValues(samples, wanted, draw, replicates));
  const x = used.map((each) => each.x);
  const fitted = x.map((at) => line.intercept + line.slope * at);
  // A line through n points takes up two degrees of freedom, so its residuals are too small by this much.
  const widen = Math.sqrt(n / (n - 2));
  const residuals = used.map((each, i) => widen * (each.y - fitted[i]));
  const slopes = new Float64Array(how.draws);
  const intercepts = new Float64Array(how.draws);
  const y = new Float64Array(n);
  for (let d = 0; d < how.draws; d++) {
    for (let i = 0; i < n; i++) {
      const again = values[i][Math.floor(draw() * replicates)] - used[i].y;
      y[i] = fitted[i] + residuals[Math.floor(draw() * n)] + (Number.isFinite(again) ? again : 0);
    }
    const drawn = robustLine(how.method, x, y);
    slopes[d] = drawn.slope;
    intercepts[d] = drawn.intercept;
  }
  const tail = (1 - how.confidence) / 2;
  const left = Math.min(...x);
  const right = Math.max(...x);
  const places = 41;
  const band = { x: new Float64Array(places), low: new Float64Array(places), high: new Float64Array(places) };
  for (let k = 0; k < places; k++) {
    band.x[k] = left + ((right - left) * k) / (places - 1);
    const at = slopes.map((slope, d) => intercepts[d] + slope * band.x[k]);
    band.low[k] = quantileOf(at, tail);
    band.high[k] = quantileOf(at, 1 - tail);
  }
  return {
    slope: [quantileOf(slopes, tail), quantileOf(slopes, 1 - tail)] as const,
    sigma: values.map((each) => (quantileOf(each, 0.8413) - quantileOf(each, 0.1587)) / 2),
    band,
  };
}

function spanNotes(x: readonly number[], sigma: Float64Array | undefined, against: string, unit: string): string[] {
  const span = Math.max(...x) - Math.min(...x);
  const error = sigma === undefined ? NaN : medianOf(sigma);
  return span < 2 * error
    ? [
        `${against} spans only ${span.toFixed(0)} ${unit} between the volcanoes, within twice its 1σ of ${error.toFixed(0)} ${unit}: a ` +
          'trend could not be seen.',
      ]
    : [];
}

function plainSentence(t: {
  of: string;
  at: AtComposition | undefined;
  against: string;
  unit: string;
  againstUnit: string;
  line: Line;
  interval: readonly [number, number];
  tau: number;
  p: number;
  verdict: ArcTrend['verdict'];
  count: number;
  by: string;
  confidence: number;
}): string {
  const names: Readonly<Record<string, string>> = {
    SlabDepth: 'slab depth',
    ThermalParameter: 'thermal parameter',
    TrenchDistance: 'distance from the trench',
    ArcPosition: 'position along the arc',
    SlabDip: 'slab dip',
  };
  const versus = names[t.against] ?? t.against;
  const what = nameOf(t.of, t.at);
  const number = (value: number) => Number(value.toPrecision(3)).toString().replace('-', '−');
  const unit = `${t.unit === '' ? '' : ` ${t.unit === 'wt%' ? 'wt %' : t.unit}`} per 100 ${t.againstUnit || 'units'}`;
  const order = `Kendall's τ ${t.tau.toFixed(2).replace('-', '−')}, p ${t.p < 0.001 ? '< 0.001' : t.p.toPrecision(2)}`;
  const interval = `${Math.round(100 * t.confidence)} % interval ${number(100 * t.interval[0])} to ${number(100 * t.interval[1])}`;
  const figures = `${number(100 * t.line.slope)}${unit}, ${interval}; ${order}`;
  const groups = `${t.count} ${t.by === 'volcano' ? 'volcanoes' : 'groups'}`;
  const way = t.line.slope > 0 ? 'rises' : 'falls';
  if (t.verdict === 'trend') return `${what} ${way} with ${versus} across ${groups} (${figures}).`;
  if (t.verdict === 'weak')
    return `${what} may ${t.line.slope > 0 ? 'rise' : 'fall'} with ${versus}, but across ${groups} chance is not ruled out (${figures}).`;
  return `No trend of ${what} with ${versus} is shown by ${groups} (${figures}).`;
}
