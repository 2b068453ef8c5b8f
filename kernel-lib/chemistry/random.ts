import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

/** A stream of random numbers that the seed alone decides, on every machine. */
export interface SeededRandom {
  /** Uniform in [0, 1). */
  readonly uniform: () => number;
  /** Normal with mean 0 and standard deviation 1 (Marsaglia's polar method). */
  readonly normal: () => number;
}

/** The generator's first numbers still look like its seed. */
const discarded = 32;

/**
 * @internal A seeded stream.
 *
 * @param who the public function that takes the seed, for the error
 * @throws RangeError when the seed is not a whole number
 */
export function seededRandom(seed: number, who: string): SeededRandom {
  if (!Number.isSafeInteger(seed)) throw new RangeError(`${who}: seed is ${String(seed)}; give a whole number.`);
  const generator = xoroshiro128plus(seed);
  const uniform = () => uniformFloat64(generator);
  for (let i = 0; i < discarded; i++) uniform();
  let second = NaN;
  const normal = () => {
    if (!Number.isNaN(second)) {
      const kept = second;
      second = NaN;
      return kept;
    }
    let [u, v, s] = [0, 0, 0];
    do {
      u = 2 * uniform() - 1;
      v = 2 * uniform() - 1;
      s = u * u + v * v;
    } while (s >= 1 || s === 0);
    const factor = Math.sqrt((-2 * Math.log(s)) / s);
    second = v * factor;
    return u * factor;
  };
  return { uniform, normal };
}
