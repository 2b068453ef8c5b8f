import { quantileSorted, sampleCorrelation } from 'simple-statistics';
import type { IndicatorAnswers } from './answers';
import type { Evidence } from './evidence';

/** The middle of an indicator's own quantity in a group, over the samples that may be used for it. NaN with none. */
export interface IndicatorValues {
  readonly indicator: string;
  readonly samples: number;
  readonly median: number;
  readonly lowerQuartile: number;
  readonly upperQuartile: number;
}

/** A trend of a group: the correlation of two quantities with its 95 % interval, and what that says. */
export interface IndicatorTrend {
  readonly indicator: string;
  readonly samples: number;
  readonly correlation: number;
  readonly low: number;
  readonly high: number;
  readonly direction: 'rising' | 'falling' | 'flat' | 'too few samples';
  readonly reading: string;
}

/** Fewer points than this say nothing about a trend (own convention). */
const fewestForTrend = 8;

/** @internal Median and quartiles of one indicator's quantity in a group. */
export function groupValues({ indicator, values, usable }: IndicatorAnswers, rows: Int32Array): IndicatorValues {
  const picked = new Float64Array(rows.length);
  let count = 0;
  if (values !== undefined) {
    for (const row of rows) {
      const value = values.values[row];
      if (usable[row] === 1 && Number.isFinite(value)) picked[count++] = value;
    }
  }
  if (count === 0) return { indicator: indicator.key, samples: 0, median: NaN, lowerQuartile: NaN, upperQuartile: NaN };
  const sorted = picked.subarray(0, count).sort() as unknown as number[];
  return {
    indicator: indicator.key,
    samples: count,
    median: quantileSorted(sorted, 0.5),
    lowerQuartile: quantileSorted(sorted, 0.25),
    upperQuartile: quantileSorted(sorted, 0.75),
  };
}

/** @internal The trend of one indicator in a group, on measured values only. */
export function groupTrend({ indicator, values, usable }: IndicatorAnswers, rows: Int32Array, evidence: Evidence): IndicatorTrend {
  const along = evidence.grounds.volatileFree.column(indicator.against!);
  const x: number[] = [];
  const y: number[] = [];
  if (values !== undefined && along !== undefined) {
    for (const row of rows) {
      const [a, b] = [along.values[row], values.values[row]];
      if (usable[row] !== 1 || !Number.isFinite(a) || !Number.isFinite(b)) continue;
      x.push(a);
      y.push(b);
    }
  }
  const samples = x.length;
  const spreads = samples >= fewestForTrend && x.some((each) => each !== x[0]) && y.some((each) => each !== y[0]);
  if (!spreads)
    return {
      indicator: indicator.key,
      samples,
      correlation: NaN,
      low: NaN,
      high: NaN,
      direction: 'too few samples',
      reading: 'too few samples for a trend',
    };
  const correlation = sampleCorrelation(x, y);
  // Fisher's transformation: atanh(r) is near normal with standard error 1/√(n − 3).
  const half = 1.959964 / Math.sqrt(samples - 3);
  const [low, high] = [Math.tanh(Math.atanh(correlation) - half), Math.tanh(Math.atanh(correlation) + half)];
  const direction = low > 0 ? 'rising' : high < 0 ? 'falling' : 'flat';
  return { indicator: indicator.key, samples, correlation, low, high, direction, reading: indicator[direction] ?? direction };
}

/** @internal The middle of a group's coordinates (°), NaN without any: a mean of directions, so that the 180° meridian is no edge. */
export function groupPosition(evidence: Evidence, rows: Int32Array): { latitude: number; longitude: number } {
  const { columns } = evidence.grounds.suite;
  const latitude = columns.get('latitude')?.values;
  const longitude = columns.get('longitude')?.values;
  if (latitude === undefined || longitude === undefined) return { latitude: NaN, longitude: NaN };
  const degree = Math.PI / 180;
  let [x, y, z] = [0, 0, 0];
  for (const row of rows) {
    const [phi, lambda] = [latitude[row] * degree, longitude[row] * degree];
    if (!Number.isFinite(phi) || !Number.isFinite(lambda)) continue;
    x += Math.cos(phi) * Math.cos(lambda);
    y += Math.cos(phi) * Math.sin(lambda);
    z += Math.sin(phi);
  }
  if (x === 0 && y === 0 && z === 0) return { latitude: NaN, longitude: NaN };
  return { latitude: Math.atan2(z, Math.hypot(x, y)) / degree, longitude: Math.atan2(y, x) / degree };
}
