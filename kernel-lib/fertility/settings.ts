import type { ProportionMethod } from './binomial';
import type { FertilityBasis } from './ground';
import type { WeightVariation } from './weight-sensitivity';
import { fertilityIndicators, fertilityWeights, type FertilityIndicator } from './tables';
import type { IntervalChoice } from './tally';

/** How the evidence is weighed. */
export interface WeightingOptions {
  /** Weights by indicator key, over the defaults of `fertilityWeights()`; 0 takes an indicator out of the score. */
  readonly weights?: Readonly<Record<string, number>>;
  /** The score above which evidence speaks for a group, 0–1 (default 0.5: more samples meet the criteria than not; own convention). */
  readonly cut?: number;
  /** Interval of a share: `wilson` (default) or `clopper-pearson`. */
  readonly interval?: ProportionMethod;
  /** Confidence of the intervals (default 0.95). */
  readonly confidence?: number;
  /** Basis of silica and the other oxides: `volatile-free` (default) or `as given`. */
  readonly basis?: FertilityBasis;
}

/** How groups are ranked. */
export interface RankingOptions extends WeightingOptions {
  /** What decides the rank: the `low` end of the score's interval (default: what the samples support at least) or the `score`. */
  readonly rankBy?: 'low' | 'score';
  /** Draws of the weights for the sensitivity of the rank (default 1000). */
  readonly draws?: number;
  /** Each weight is multiplied by a factor between 1/spread and spread (default 3). */
  readonly spread?: number;
  /** Seed of the draws (default 7946). */
  readonly seed?: number;
  /** How many places count as the first in `amongFirst` (default 5). */
  readonly first?: number;
}

/** @internal Options checked and filled in. */
export interface Settings {
  readonly criteria: readonly FertilityIndicator[];
  readonly weights: Readonly<Record<string, number>>;
  readonly cut: number;
  readonly interval: IntervalChoice;
  readonly basis: FertilityBasis;
  readonly rankBy: 'low' | 'score';
  readonly variation: WeightVariation;
}

const known = ['weights', 'cut', 'interval', 'confidence', 'basis', 'rankBy', 'draws', 'spread', 'seed', 'first'];

/** @internal Checks the options of a public function and fills in the defaults. `more`: further option names that it takes. */
export function readSettings(what: string, options: RankingOptions, more: readonly string[] = ['labelled']): Settings {
  if (typeof options !== 'object' || options === null)
    throw new RangeError(`${what}: the options must be an object such as { weights: { 'v-sc-2014': 2 } }, not ${String(options)}.`);
  for (const name of Object.keys(options)) {
    if (!known.includes(name) && !more.includes(name))
      throw new RangeError(`${what}: there is no option "${name}". Known: ${[...more, ...known].join(', ')}.`);
  }
  const {
    cut = 0.5,
    interval = 'wilson',
    confidence = 0.95,
    basis = 'volatile-free',
    rankBy = 'low',
    draws = 1000,
    spread = 3,
    seed = 7946,
    first = 5,
  } = options;
  const number = (name: string, value: unknown, ok: (value: number) => boolean, wanted: string) => {
    if (typeof value !== 'number' || !ok(value)) throw new RangeError(`${what}: ${name} must be ${wanted}, not ${String(value)}.`);
  };
  const oneOf = (name: string, value: unknown, choices: readonly string[]) => {
    if (!choices.includes(value as string))
      throw new RangeError(`${what}: ${name} must be ${choices.map((choice) => `"${choice}"`).join(' or ')}, not "${String(value)}".`);
  };
  number('cut', cut, (value) => value > 0 && value < 1, 'a number between 0 and 1');
  number('confidence', confidence, (value) => value > 0 && value < 1, 'a number between 0 and 1, such as 0.95');
  number('draws', draws, (value) => Number.isInteger(value) && value >= 1 && value <= 100_000, 'a whole number from 1 to 100000');
  number('spread', spread, (value) => value >= 1 && Number.isFinite(value), 'a number from 1 up (1 leaves the weights as they are)');
  number('seed', seed, Number.isInteger, 'a whole number');
  number('first', first, (value) => Number.isInteger(value) && value >= 1, 'a whole number from 1 up');
  oneOf('interval', interval, ['wilson', 'clopper-pearson']);
  oneOf('basis', basis, ['volatile-free', 'as given']);
  oneOf('rankBy', rankBy, ['low', 'score']);
  const criteria = fertilityIndicators().filter(({ kind }) => kind === 'criterion');
  return {
    criteria,
    weights: readWeights(what, options.weights, criteria),
    cut,
    interval: { method: interval, confidence },
    basis,
    rankBy,
    variation: { draws, spread, seed, first },
  };
}

function readWeights(what: string, given: unknown, criteria: readonly FertilityIndicator[]): Readonly<Record<string, number>> {
  const weights: Record<string, number> = Object.fromEntries(criteria.map(({ key }) => [key, 0]));
  for (const { indicator, weight } of fertilityWeights()) weights[indicator] = weight;
  if (given !== undefined && (typeof given !== 'object' || given === null))
    throw new RangeError(`${what}: weights must be an object by indicator key, not ${String(given)}.`);
  for (const [key, weight] of Object.entries((given ?? {}) as Record<string, unknown>)) {
    if (!Object.hasOwn(weights, key))
      throw new RangeError(`${what}: weights: there is no criterion "${key}". Known: ${Object.keys(weights).join(', ')}.`);
    if (typeof weight !== 'number' || !(weight >= 0) || !Number.isFinite(weight))
      throw new RangeError(`${what}: weights: ${key} must be a number from 0 up, not ${String(weight)}.`);
    weights[key] = weight;
  }
  if (Object.values(weights).every((weight) => weight === 0))
    throw new RangeError(`${what}: all weights are 0; give at least one criterion a weight above 0.`);
  return weights;
}
