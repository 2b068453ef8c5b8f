/** A stretch of melting over which the same phases melt in the same proportions. */
export interface MeltingStage {
  /** Melt fraction, of the solid at the very start, at which the stage begins and ends. */
  readonly from: number;
  readonly to: number;
  /** Masses of the minerals left at the stage's beginning, relative to the solid at the very start. */
  readonly masses: Float64Array;
  /** Proportions in which the minerals go into the melt; they sum to one, and are negative for minerals that the reaction makes. */
  readonly reaction: Float64Array;
}

/** A mineral counts as gone below this mass. */
const gone = 1e-12;

/**
 * Divides melting into stages that end where a mineral runs out. From there on the reaction goes on without it, the other proportions
 * scaled to a sum of one; where the reaction's leftover minerals cannot make a melt (no positive sum), the modal proportions of what is
 * left are taken.
 *
 * @param masses mode of the solid, sum 1
 * @param reaction proportions, sum 1
 * @param upTo last melt fraction
 */
export function meltingStages(masses: Float64Array, reaction: Float64Array, upTo: number): readonly MeltingStage[] {
  const stages: MeltingStage[] = [];
  let left = masses.slice();
  let shares = reaction.slice();
  let at = 0;
  while (at < upTo - gone) {
    let end = upTo;
    for (let m = 0; m < left.length; m++) if (shares[m] > 0) end = Math.min(end, at + left[m] / shares[m]);
    stages.push({ from: at, to: end, masses: left, reaction: shares });
    left = left.map((mass, m) => Math.max(0, mass - shares[m] * (end - at)));
    at = end;
    if (at >= upTo - gone) break;
    const remaining = shares.map((share, m) => (left[m] > gone || share < 0 ? share : 0));
    const sum = remaining.reduce((total, share) => total + share, 0);
    const total = left.reduce((mass, each) => mass + (each > gone ? each : 0), 0);
    if (total <= gone) break;
    const usable = sum > gone && remaining.some((share) => share > 0);
    shares = usable ? remaining.map((share) => share / sum) : left.map((mass) => (mass > gone ? mass / total : 0));
  }
  return stages;
}

/** What melting one element gives at one melt fraction, all relative to the concentration in the solid at the start. */
export interface MeltedElement {
  /** The melt in equilibrium with the solid at this moment. */
  liquid: number;
  /** All melts extracted so far, pooled; the liquid itself before the first is extracted. */
  pooled: number;
  /** The solid left. */
  residue: number;
}

/**
 * Near-fractional melting of one element through all stages, with a part of the melt retained in the rock: its closed form is exact in
 * each stage, because the element left behind obeys d ln A = −dX/(melt retained + Σ solid mass × K), linear in the melt fraction.
 * Without retained melt it is Shaw's fractional melting; with it, modal, it is Zou's dynamic melting.
 *
 * @param coefficients K by mineral
 * @param retained Φ: melt held in the rock, as a mass fraction of solid and melt together (0 ≤ Φ < 1)
 * @param fractions ascending melt fractions, of the solid at the start
 */
export function meltByExtraction(
  stages: readonly MeltingStage[],
  coefficients: ArrayLike<number>,
  retained: number,
  fractions: ArrayLike<number>,
): readonly MeltedElement[] {
  const perSolid = retained / (1 - retained);
  const results: MeltedElement[] = [];
  const held = (stage: MeltingStage, F: number): number => {
    let sum = 0;
    for (let m = 0; m < stage.masses.length; m++) sum += Math.max(0, stage.masses[m] - stage.reaction[m] * (F - stage.from)) * coefficients[m];
    return sum;
  };
  /** Σ p K: how fast the solid's hold on the element falls. */
  const slope = (stage: MeltingStage): number => {
    let sum = 0;
    for (let m = 0; m < stage.masses.length; m++) sum += stage.reaction[m] * coefficients[m];
    return sum;
  };
  let [s, amount] = [0, 1];
  let from = Math.max(retained, 0);
  const advance = (stage: MeltingStage, start: number, F: number, before: number): number => {
    if (F <= start) return before;
    const g0 = perSolid * (1 - start) + held(stage, start);
    const g1 = perSolid * (1 - F) + held(stage, F);
    const fall = perSolid + slope(stage);
    if (g1 <= 0) return 0;
    const exponent = Math.abs(fall * (F - start)) < 1e-9 * g0 ? -(F - start) / ((1 - retained) * g0) : Math.log(g1 / g0) / ((1 - retained) * fall);
    return before * Math.exp(exponent);
  };
  for (let i = 0; i < fractions.length; i++) {
    const F = fractions[i];
    if (F <= retained) {
      // Nothing has been extracted yet: all the melt there is stays with the solid.
      const at = stages.find((stage) => F <= stage.to) ?? stages[stages.length - 1];
      const hold = held(at, F);
      const liquid = 1 / (F + hold);
      results.push({ liquid, pooled: liquid, residue: (liquid * hold) / (1 - F) });
      continue;
    }
    while (s < stages.length - 1 && F > stages[s].to) {
      amount = advance(stages[s], Math.max(from, stages[s].from), stages[s].to, amount);
      from = Math.max(from, stages[s].to);
      s++;
    }
    const now = advance(stages[s], from, F, amount);
    const hold = held(stages[s], F);
    const kept = perSolid * (1 - F);
    const liquid = kept + hold > 0 ? now / (kept + hold) : 0;
    const extracted = (F - retained) / (1 - retained);
    results.push({ liquid, pooled: (1 - now) / extracted, residue: F < 1 ? (liquid * hold) / (1 - F) : 0 });
  }
  return results;
}

/** Batch melting of one element: the melt stays with the solid, whatever phases have run out on the way. */
export function meltInBatch(
  stages: readonly MeltingStage[],
  coefficients: ArrayLike<number>,
  fractions: ArrayLike<number>,
): readonly MeltedElement[] {
  return Array.from(fractions, (F) => {
    const at = stages.find((stage) => F <= stage.to) ?? stages[stages.length - 1];
    let hold = 0;
    for (let m = 0; m < at.masses.length; m++) hold += Math.max(0, at.masses[m] - at.reaction[m] * (F - at.from)) * coefficients[m];
    const liquid = 1 / (F + hold);
    return { liquid, pooled: liquid, residue: F < 1 ? (liquid * hold) / (1 - F) : 0 };
  });
}
