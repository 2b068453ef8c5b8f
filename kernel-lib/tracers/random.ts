import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

/** A seeded stream of random numbers: the same seed gives the same numbers on every machine. */
export interface RandomStream {
  /** Uniform in [0, 1). */
  readonly uniform: () => number;
  /** Normal with mean 0 and standard deviation 1 (Box–Muller, polar form). */
  readonly normal: () => number;
}

/** The generator starts close to its seed's bit pattern; this many numbers are thrown away first. */
const warmUp = 32;

/** A stream from an integer seed. */
export function randomStream(seed: number): RandomStream {
  const generator = xoroshiro128plus(seed);
  const uniform = () => uniformFloat64(generator);
  for (let i = 0; i < warmUp; i++) uniform();
  let spare = NaN;
  const normal = (): number => {
    if (!Number.isNaN(spare)) {
      const kept = spare;
      spare = NaN;
      return kept;
    }
    for (;;) {
      const u = 2 * uniform() - 1;
      const v = 2 * uniform() - 1;
      const s = u * u + v * v;
      if (s >= 1 || s === 0) continue;
      const factor = Math.sqrt((-2 * Math.log(s)) / s);
      spare = v * factor;
      return u * factor;
    }
  };
  return { uniform, normal };
}

/** Throws when a seed is not one. */
export function checkSeed(caller: string, seed: number): void {
  if (!Number.isSafeInteger(seed)) throw new RangeError(`${caller}: seed must be a whole number, not ${String(seed)}.`);
}
