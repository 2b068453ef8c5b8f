import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import type { Weighted } from './score';
import type { IndicatorTally } from './tally';

/** How a group's rank moves when the weights do. */
export interface RankRange {
  /** Best and worst rank in the middle 95 % of the draws. */
  readonly best: number;
  readonly worst: number;
  /** Share of the draws in which the group is among the first (as many as `first`). */
  readonly amongFirst: number;
}

/** @internal How the weights are varied. */
export interface WeightVariation {
  readonly draws: number;
  readonly spread: number;
  readonly seed: number;
  /** How many places count as the first. */
  readonly first: number;
}

/**
 * @internal Ranks of all groups while every weight is multiplied by its own factor, drawn evenly in the logarithm from 1/spread to spread.
 *
 * @param tallies by group, each in the order of `weighted`
 * @param by which end of the score decides the rank
 */
export function rankRanges(
  tallies: readonly (readonly IndicatorTally[])[],
  weighted: readonly Weighted[],
  by: 'low' | 'score',
  variation: WeightVariation,
): RankRange[] {
  const groups = tallies.length;
  const { draws, spread, seed, first } = variation;
  const generator = xoroshiro128plus(seed);
  const used = weighted.map(({ weight }, k) => ({ weight, k })).filter(({ weight }) => weight > 0);
  // Flat copies of what each draw reads: shares by group, NaN where a criterion could not be asked.
  const parts = used.map(({ k }) =>
    Float64Array.from(tallies, (group) => (group[k].asked === 0 ? NaN : by === 'low' ? group[k].low : group[k].share)),
  );
  const ranks = new Int32Array(groups * draws);
  const scores = new Float64Array(groups);
  const order = new Uint32Array(groups);
  const half = Math.log(spread);
  for (let draw = 0; draw < draws; draw++) {
    const weights = used.map(({ weight }) => weight * Math.exp((2 * uniformFloat64(generator) - 1) * half));
    for (let g = 0; g < groups; g++) {
      let sum = 0;
      let total = 0;
      for (let j = 0; j < parts.length; j++) {
        const share = parts[j][g];
        if (share !== share) continue;
        sum += weights[j];
        total += weights[j] * share;
      }
      scores[g] = sum === 0 ? -1 : total / sum;
      order[g] = g;
    }
    order.sort((a, b) => scores[b] - scores[a] || a - b);
    let rank = 0;
    for (let place = 0; place < groups; place++) {
      // Equal scores share the better rank.
      if (place === 0 || scores[order[place]] < scores[order[place - 1]]) rank = place + 1;
      ranks[order[place] * draws + draw] = rank;
    }
  }
  return Array.from({ length: groups }, (_, g) => {
    const own = ranks.subarray(g * draws, (g + 1) * draws).sort();
    let among = 0;
    while (among < draws && own[among] <= first) among++;
    return { best: own[Math.floor(0.025 * (draws - 1))], worst: own[Math.ceil(0.975 * (draws - 1))], amongFirst: among / draws };
  });
}
