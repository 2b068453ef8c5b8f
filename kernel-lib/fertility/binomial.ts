import { jStat } from 'jstat';

/** How the interval of a proportion is made. */
export type ProportionMethod = 'wilson' | 'clopper-pearson';

/**
 * The confidence interval of a proportion from counts.
 *
 * @param met how many met the criterion; 0 to `asked`, whole
 * @param asked how many were asked; 0 gives the interval 0 to 1
 * @param options `method`: `wilson` (default: the score interval) or `clopper-pearson` (exact, never too narrow); `confidence`: 0.95 by
 *   default
 * @returns `low` and `high`, both between 0 and 1
 * @throws RangeError for counts that are not counts, a confidence outside 0–1, an unknown method
 * @source Wilson 1927; Clopper & Pearson 1934
 * @example proportionInterval(5, 10) // { low: 0.2366, high: 0.7634 }
 */
export function proportionInterval(
  met: number,
  asked: number,
  options: { readonly method?: ProportionMethod; readonly confidence?: number } = {},
): { readonly low: number; readonly high: number } {
  const { method = 'wilson', confidence = 0.95 } = options;
  if (!Number.isInteger(asked) || asked < 0) throw new RangeError(`proportionInterval: asked must be a whole number from 0 up, not ${asked}.`);
  if (!Number.isInteger(met) || met < 0 || met > asked)
    throw new RangeError(`proportionInterval: met must be a whole number from 0 to asked (${asked}), not ${met}.`);
  if (method !== 'wilson' && method !== 'clopper-pearson')
    throw new RangeError(`proportionInterval: method must be "wilson" or "clopper-pearson", not "${String(method)}".`);
  if (!(confidence > 0 && confidence < 1))
    throw new RangeError(`proportionInterval: confidence must lie between 0 and 1, such as 0.95, not ${confidence}.`);
  if (asked === 0) return { low: 0, high: 1 };
  const tail = (1 - confidence) / 2;
  if (method === 'clopper-pearson') {
    return {
      low: met === 0 ? 0 : jStat.beta.inv(tail, met, asked - met + 1),
      high: met === asked ? 1 : jStat.beta.inv(1 - tail, met + 1, asked - met),
    };
  }
  const z = normalQuantile(1 - tail);
  const share = met / asked;
  const spread = 1 + (z * z) / asked;
  const centre = share + (z * z) / (2 * asked);
  const half = z * Math.sqrt((share * (1 - share)) / asked + (z * z) / (4 * asked * asked));
  return { low: met === 0 ? 0 : (centre - half) / spread, high: met === asked ? 1 : (centre + half) / spread };
}

let known = { probability: NaN, quantile: NaN };

/** The same confidence is asked over and over, and the inverse takes far longer than the rest. */
function normalQuantile(probability: number): number {
  if (known.probability !== probability) known = { probability, quantile: jStat.normal.inv(probability, 0, 1) };
  return known.quantile;
}
