/**
 * The closed forms of trace-element behaviour that melting, crystallisation and mixing share. Scalars in, scalar out, all relative to
 * the starting concentration (C/C0). Coefficients are solid/liquid by weight, fractions by weight. None of them checks its arguments:
 * they stand in inner loops; the public functions that use them do.
 */

/**
 * Liquid of Rayleigh crystallisation: F^(D − 1).
 *
 * @param bulkD bulk solid/liquid coefficient of the crystals removed
 * @param liquidLeft fraction of liquid left, F (0 < F ≤ 1)
 * @returns C(liquid)/C0
 * @source Neumann et al. 1954; Gast 1968
 */
export function rayleighLiquid(bulkD: number, liquidLeft: number): number {
  return liquidLeft ** (bulkD - 1);
}

/** Crystals that form at this moment of Rayleigh crystallisation: D·F^(D − 1), as C(solid)/C0. */
export function rayleighSolid(bulkD: number, liquidLeft: number): number {
  return bulkD * liquidLeft ** (bulkD - 1);
}

/** All crystals removed so far by Rayleigh crystallisation: (1 − F^D)/(1 − F), as C(solid)/C0; at F = 1 the first crystal, D. */
export function rayleighCumulate(bulkD: number, liquidLeft: number): number {
  return liquidLeft === 1 ? bulkD : (1 - liquidLeft ** bulkD) / (1 - liquidLeft);
}

/**
 * Liquid of equilibrium crystallisation: 1/[F + D(1 − F)].
 *
 * @returns C(liquid)/C0
 * @source Shaw 1970
 */
export function equilibriumLiquid(bulkD: number, liquidLeft: number): number {
  return 1 / (liquidLeft + bulkD * (1 - liquidLeft));
}

/** Crystals of equilibrium crystallisation: D/[F + D(1 − F)], as C(solid)/C0. */
export function equilibriumSolid(bulkD: number, liquidLeft: number): number {
  return bulkD / (liquidLeft + bulkD * (1 - liquidLeft));
}

/**
 * Batch melt: 1/[D0 + F(1 − P)]; modal melting is P = D0.
 *
 * @param startD bulk D of the solid before melting, D0
 * @param reactionD Σ pᵢKᵢ of the phases in the proportions in which they melt, P
 * @param melt melt fraction F (0 ≤ F ≤ 1)
 * @returns C(melt)/C0
 * @source Shaw 1970
 */
export function batchMelt(startD: number, reactionD: number, melt: number): number {
  return 1 / (startD + melt * (1 - reactionD));
}

/** Solid left behind by a batch melt: (D0 − P·F)/{(1 − F)[D0 + F(1 − P)]}, as C(solid)/C0; 0 once the element is gone. */
export function batchResidue(startD: number, reactionD: number, melt: number): number {
  return Math.max(0, startD - reactionD * melt) / ((1 - melt) * (startD + melt * (1 - reactionD)));
}

/** What is left in the solid of a unit source after fractional melting: (1 − P·F/D0)^(1/P); its limit e^(−F/D0) for P → 0. */
function keptBySolid(startD: number, reactionD: number, melt: number): number {
  if (Math.abs(reactionD) < 1e-12) return Math.exp(-melt / startD);
  const left = 1 - (reactionD * melt) / startD;
  return left <= 0 ? 0 : left ** (1 / reactionD);
}

/**
 * The melt that leaves at this moment of fractional melting: (1/D0)(1 − P·F/D0)^(1/P − 1).
 * Holds while P·F < D0; beyond that the element is exhausted and the result is 0.
 *
 * @returns C(melt)/C0
 * @source Shaw 1970
 */
export function fractionalMelt(startD: number, reactionD: number, melt: number): number {
  const left = 1 - (reactionD * melt) / startD;
  return left <= 0 ? 0 : keptBySolid(startD, reactionD, melt) / (startD * left);
}

/**
 * All melts of fractional melting pooled: (1/F)[1 − (1 − P·F/D0)^(1/P)]; at F = 0 the first melt, 1/D0.
 *
 * @returns C(pooled melt)/C0
 * @source Shaw 1970
 */
export function pooledFractionalMelt(startD: number, reactionD: number, melt: number): number {
  return melt === 0 ? 1 / startD : (1 - keptBySolid(startD, reactionD, melt)) / melt;
}

/** Solid left behind by fractional melting: (1 − P·F/D0)^(1/P)/(1 − F), as C(solid)/C0; 0 once the element is exhausted. */
export function fractionalResidue(startD: number, reactionD: number, melt: number): number {
  return keptBySolid(startD, reactionD, melt) / (1 - melt);
}

/** Concentration in a mixture holding the fraction `ofFirst` (by weight) of the first end member; both concentrations in one unit. */
export function mixedConcentration(ofFirst: number, first: number, second: number): number {
  return ofFirst * first + (1 - ofFirst) * second;
}

/** The share of an element of a mixture that came with the first end member (0–1; NaN when neither holds any). */
export function shareOfFirst(ofFirst: number, first: number, second: number): number {
  return (ofFirst * first) / mixedConcentration(ofFirst, first, second);
}

/**
 * Ratio (isotopic or elemental) of a mixture. The concentrations are those of the denominator: for 87Sr/86Sr the total Sr may stand for
 * 86Sr, an error far below that of the analysis.
 *
 * @param ofFirst fraction of the first end member by weight
 * @param first `ratio` and `concentration` of the denominator element
 * @param second the same, concentration in the same unit
 * @source Langmuir et al. 1978
 */
export function mixedRatio(
  ofFirst: number,
  first: { readonly ratio: number; readonly concentration: number },
  second: { readonly ratio: number; readonly concentration: number },
): number {
  const share = shareOfFirst(ofFirst, first.concentration, second.concentration);
  return share * first.ratio + (1 - share) * second.ratio;
}
