/**
 * Closed forms for chambers that are not closed. Scalars in, scalar out; none checks its arguments: they stand in inner loops, and the
 * public functions that use them do. D is solid/liquid by weight.
 */

/** (eᵘ − 1)/u, continuous at u = 0. */
function growth(u: number): number {
  return Math.abs(u) < 1e-12 ? 1 + u / 2 : Math.expm1(u) / u;
}

/**
 * How long a magma has been at work: ∫ dMc/M for a crystallised mass x (relative to the magma at the start) when the magma's mass changes by
 * q = r + p − 1 for every unit crystallised. It is ln F / q, and x itself where q is 0, so r = 1 needs no formula of its own.
 */
export function chamberTime(crystallised: number, q: number): number {
  const u = q * crystallised;
  return Math.abs(u) < 1e-12 ? crystallised * (1 - u / 2) : Math.log1p(u) / q;
}

/**
 * Concentration in a magma that crystallises, assimilates and is recharged at constant rates: C = C0·e^(−sτ) + (r·Ca + p·Cr)·(1 − e^(−sτ))/s with s
 * = r + p + D − 1, τ from `chamberTime`. This one form holds DePaolo's separate cases and passes smoothly through r + D = 1 and r = 1.
 *
 * @param start C0; `gain` r·Ca + p·Cr, in the unit of C0
 * @source DePaolo 1981, eq. 6a; DePaolo 1985 (with recharge)
 */
export function openSystemLiquid(start: number, gain: number, bulkD: number, q: number, time: number): number {
  const s = q + bulkD;
  return start * Math.exp(-s * time) + gain * time * growth(-s * time);
}

/**
 * Liquid of in situ crystallisation, C/C0 = F^{f(E − 1)/(f − 1)} with E = 1/[D(1 − f) + f].
 *
 * @param returned fraction f of the solidification zone's liquid that returns to the chamber (0 ≤ f < 1)
 * @source Langmuir 1989
 */
export function inSituLiquid(bulkD: number, liquidLeft: number, returned: number): number {
  const enrichment = 1 / (bulkD * (1 - returned) + returned);
  return liquidLeft ** ((returned * (enrichment - 1)) / (returned - 1));
}

/**
 * Liquid of zone refining, C/C0 = 1/D − (1/D − 1)·e^(−nD); its limit 1 + n for D = 0.
 *
 * @param volumes n: rock worked through, in volumes of the zone
 * @source Harris 1957
 */
export function zoneRefinedLiquid(bulkD: number, volumes: number): number {
  return Math.exp(-volumes * bulkD) + volumes * growth(-volumes * bulkD);
}

/**
 * Lava of a chamber that is refilled and tapped until it no longer changes:
 * C/C0 = (x + y)(1 − x)^(D − 1)/[1 − (1 − x − y)(1 − x)^(D − 1)].
 *
 * @param crystallised x, the part of the chamber that crystallises each cycle
 * @param erupted y, the part that erupts; x + y is refilled with the parent
 * @source O'Hara 1977; O'Hara & Mathews 1981
 */
export function refilledSteadyState(bulkD: number, crystallised: number, erupted: number): number {
  const enrichment = (1 - crystallised) ** (bulkD - 1);
  const lost = crystallised + erupted;
  return (lost * enrichment) / (1 - (1 - lost) * enrichment);
}
