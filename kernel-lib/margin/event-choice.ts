/** Which seismicity an event belongs to: 0 the slab's upper plane · 1 its lower plane · 2 shallow crust of the upper plate · 3 neither. */
export const eventKind = { slab: 0, lowerPlane: 1, crust: 2, other: 3 } as const;

/** Names of the kinds of event, by number. */
export const eventKindNames = ['slab', 'lower plane', 'shallow crust', 'neither'] as const;

/** The mixture that residuals from the slab surface are read as. All lengths in km, measured across the slab. */
export interface ResidualMixture {
  /** 1σ of the upper plane about the surface. */
  spread: number;
  /** Distance of the lower plane below the surface and its 1σ; share 0 where there is none. */
  lowerAt: number;
  lowerSpread: number;
  /** Shares of the four kinds, summing to 1. */
  share: [number, number, number, number];
}

const bell = (residual: number, spread: number): number => Math.exp(-0.5 * (residual / spread) ** 2) / (spread * Math.sqrt(2 * Math.PI));

/** Range over which events that belong to nothing are taken as spread evenly, km. */
const otherRange = 300;

/**
 * One step of expectation–maximisation: the probability that each event belongs to the upper plane, and the mixture that these
 * probabilities imply.
 *
 * @param across distance of each event below the surface, measured across the slab, km
 * @param depth km
 * @param crustDepth events shallower than this may be crust of the upper plate
 * @param mixture changed in place
 * @param slabShare filled with the probability of the upper plane; `kinds` with the likeliest kind
 */
export function updateMixture(
  across: Float64Array,
  depth: Float64Array,
  crustDepth: number,
  mixture: ResidualMixture,
  slabShare: Float64Array,
  kinds: Uint8Array,
  limits: { readonly least: number; readonly most: number },
): void {
  const { spread, lowerAt, lowerSpread, share } = mixture;
  const sum = [0, 0, 0, 0];
  let square = 0;
  let lowerSum = 0;
  let lowerSquare = 0;
  for (let i = 0; i < across.length; i++) {
    const r = across[i];
    const p0 = share[0] * bell(r, spread);
    const p1 = share[1] === 0 ? 0 : share[1] * bell(r - lowerAt, lowerSpread);
    const p2 = depth[i] < crustDepth ? share[2] / crustDepth : 0;
    const p3 = share[3] / otherRange;
    const all = p0 + p1 + p2 + p3;
    slabShare[i] = p0 / all;
    kinds[i] =
      p0 >= p1 && p0 >= p2 && p0 >= p3 ? eventKind.slab : p1 >= p2 && p1 >= p3 ? eventKind.lowerPlane : p2 >= p3 ? eventKind.crust : eventKind.other;
    sum[0] += p0 / all;
    sum[1] += p1 / all;
    sum[2] += p2 / all;
    sum[3] += p3 / all;
    square += (p0 / all) * r * r;
    lowerSum += (p1 / all) * r;
    lowerSquare += (p1 / all) * r * r;
  }
  if (sum[0] > 0) mixture.spread = Math.min(limits.most, Math.max(limits.least, Math.sqrt(square / sum[0])));
  if (sum[1] > 1) {
    mixture.lowerAt = Math.min(45, Math.max(12, lowerSum / sum[1]));
    mixture.lowerSpread = Math.min(12, Math.max(limits.least, Math.sqrt(Math.max(0, lowerSquare / sum[1] - (lowerSum / sum[1]) ** 2))));
  }
  for (let k = 0; k < 4; k++) mixture.share[k] = sum[k] / across.length;
}

/** Two planes of seismicity found in residuals: where each lies and its share. */
export interface TwoPlanes {
  readonly upperAt: number;
  readonly lowerAt: number;
  readonly spread: number;
  readonly lowerShare: number;
}

/**
 * Whether residuals fall into two planes: two bells of one width fitted by expectation–maximisation, accepted against a single bell by the
 * Bayesian information criterion when they stand at least 12 km and 2.5 widths apart and the lesser holds at least 15 % of the events.
 */
export function findTwoPlanes(across: ArrayLike<number>): TwoPlanes | undefined {
  const sorted = Float64Array.from(across).sort();
  // Every k-th of the sorted values stands for all: some two thousand tell two planes as well as twenty thousand.
  const every = Math.max(1, Math.floor(sorted.length / 2000));
  const values = sorted.filter((_, i) => i % every === 0);
  const n = values.length;
  if (n < 60) return undefined;
  let mean = 0;
  for (const v of values) mean += v / n;
  let variance = 0;
  for (const v of values) variance += (v - mean) ** 2 / n;
  let single = 0;
  for (const v of values) single += Math.log(bell(v - mean, Math.sqrt(variance)));
  let a = values[Math.floor(0.2 * n)];
  let b = values[Math.floor(0.8 * n)];
  let spread = Math.max(2, (b - a) / 5);
  let lower = 0.5;
  let double = -Infinity;
  for (let round = 0; round < 200; round++) {
    let [sumA, sumB, momentA, momentB, square, likelihood] = [0, 0, 0, 0, 0, 0];
    for (const v of values) {
      const pa = (1 - lower) * bell(v - a, spread);
      const pb = lower * bell(v - b, spread);
      const share = pb / (pa + pb + 1e-300);
      sumA += 1 - share;
      sumB += share;
      momentA += (1 - share) * v;
      momentB += share * v;
      square += (1 - share) * (v - a) ** 2 + share * (v - b) ** 2;
      likelihood += Math.log(pa + pb + 1e-300);
    }
    a = momentA / sumA;
    b = momentB / sumB;
    spread = Math.max(1, Math.sqrt(square / n));
    lower = sumB / n;
    if (Math.abs(likelihood - double) < 1e-6 * n) break;
    double = likelihood;
  }
  const better = -2 * double + 4 * Math.log(n) < -2 * single + 2 * Math.log(n);
  const apart = b - a;
  return better && apart >= 12 && apart >= 2.5 * spread && Math.min(lower, 1 - lower) >= 0.15
    ? { upperAt: a, lowerAt: b, spread, lowerShare: lower }
    : undefined;
}
