import { cationFractions, majorMasses, majors, place } from './liquid-state';
import { thermometers } from './melt-tables';

const scratch = new Float64Array(majors);

/** @internal °C from MgO (Helz & Thornber 1987). */
export function magnesiaTemperature(oxides: ArrayLike<number>): number {
  const { perMgO, constant } = thermometers().magnesia;
  return perMgO * oxides[place.MgO] + constant;
}

/** @internal °C from the liquid alone (Putirka 2008, equation 14). */
export function liquidTemperature(oxides: ArrayLike<number>, water: number): number {
  const { constant, magnesiumNumber, MgO, FeO, alkalis, H2O } = thermometers().liquid;
  const { molar } = majorMasses();
  const mg = oxides[place.MgO] / molar[place.MgO];
  const fe = oxides[place.FeOT] / molar[place.FeOT];
  return (
    constant +
    magnesiumNumber * (mg / (mg + fe)) +
    MgO * oxides[place.MgO] +
    FeO * oxides[place.FeOT] +
    alkalis * (oxides[place.Na2O] + oxides[place.K2O]) +
    H2O * water
  );
}

/** @internal °C of olivine (Fo as a fraction) and liquid (Putirka 2008, equation 22); pressure in bar, water in wt %. */
export function olivineLiquidTemperature(oxides: ArrayLike<number>, Fo: number, pressure: number, water: number): number {
  const { n0, n1, n2, d0, dMg, dNM, dSi, dNF, dH2O, dP } = thermometers().olivineLiquid;
  const X = cationFractions(oxides, scratch);
  const P = pressure / 1e4;
  const magnesium = (2 * Fo) / 3 / X[place.MgO];
  const networkModifiers = X[place.FeOT] + X[place.MnO] + X[place.MgO] + X[place.CaO];
  const NF = 3.5 * Math.log(1 - X[place.Al2O3]) + 7 * Math.log(1 - X[place.TiO2]);
  return (
    (n0 + n1 * P + n2 * P * P) /
    (d0 + dMg * Math.log(magnesium) + dNM * Math.log(1.5 * networkModifiers) + dSi * Math.log(3 * X[place.SiO2]) + dNF * NF + dH2O * water + dP * P)
  );
}

/** @internal Fo (fraction) of the olivine in equilibrium with a liquid whose iron is ferric to a share `ferric`. */
export function equilibriumOlivine(oxides: ArrayLike<number>, ferric: number, Kd: number): number {
  const { molar } = majorMasses();
  const ironToMagnesium = ((oxides[place.FeOT] / molar[place.FeOT]) * (1 - ferric)) / (oxides[place.MgO] / molar[place.MgO]);
  return 1 / (1 + Kd * ironToMagnesium);
}

/** @internal Kd of olivine (Fo as a fraction) and a liquid whose iron is ferric to a share `ferric`. */
export function exchangeOf(oxides: ArrayLike<number>, ferric: number, Fo: number): number {
  const { molar } = majorMasses();
  const ironToMagnesium = ((oxides[place.FeOT] / molar[place.FeOT]) * (1 - ferric)) / (oxides[place.MgO] / molar[place.MgO]);
  return (1 - Fo) / Fo / ironToMagnesium;
}

/** @internal H2O at saturation, wt %, at a pressure in bar (Katz et al. 2003). */
export function waterAtSaturation(pressure: number): number {
  const { a, power, b } = thermometers().waterSolubility;
  const P = pressure / 1e4;
  return a * P ** power + b * P;
}
