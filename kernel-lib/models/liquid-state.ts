import { majorOxides } from '../chemistry';
import { molarMass, cationsPerFormula } from '../tables';

/** @internal Places of the majors in a liquid's array, all iron as FeO. */
export const place = Object.fromEntries(majorOxides.map((oxide, i) => [oxide, i])) as Readonly<Record<(typeof majorOxides)[number], number>>;

/** @internal Number of majors. */
export const majors = majorOxides.length;

let cached: { molar: Float64Array; cations: Float64Array } | undefined;

/** @internal Molar masses and cations a formula unit, in the majors' order. */
export function majorMasses(): { molar: Float64Array; cations: Float64Array } {
  return (cached ??= {
    molar: Float64Array.from(majorOxides, (oxide) => molarMass(oxide)),
    cations: Float64Array.from(majorOxides, (oxide) => cationsPerFormula(oxide)),
  });
}

/** @internal Cation fractions of an anhydrous liquid (wt % in the majors' order), written into `out`. */
export function cationFractions(oxides: ArrayLike<number>, out: Float64Array): Float64Array {
  const { molar, cations } = majorMasses();
  let sum = 0;
  for (let i = 0; i < majors; i++) sum += out[i] = ((oxides[i] || 0) * cations[i]) / molar[i];
  for (let i = 0; i < majors; i++) out[i] /= sum;
  return out;
}

/** @internal Zero of the Celsius scale, K. */
export const celsius = 273.15;
