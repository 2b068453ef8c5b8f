import { molarMass } from '../tables';
import { celsius, majorMasses, majors, place } from './liquid-state';
import { viscosityTable } from './melt-tables';

const mol = new Float64Array(majors);

/**
 * @internal log10 of the viscosity of a liquid, Pa s, with the model's B and C.
 *
 * @param oxides wt % in the majors' order, anhydrous, all iron as FeO; `water` H2O in wt % of the hydrous liquid; `temperature` °C
 */
export function meltViscosityOf(oxides: ArrayLike<number>, water: number, temperature: number): { log10: number; B: number; C: number } {
  const { A, B, C } = viscosityTable();
  const { molar } = majorMasses();
  let sum = 0;
  for (let i = 0; i < majors; i++) sum += oxides[i] || 0;
  let moles = water / molarMass('H2O');
  for (let i = 0; i < majors; i++) moles += mol[i] = ((oxides[i] || 0) * ((100 - water) / sum)) / molar[i];
  for (let i = 0; i < majors; i++) mol[i] *= 100 / moles;
  const H2O = (100 * (water / molarMass('H2O'))) / moles;
  const [SiO2, TiO2, Al2O3, FeO, MnO, MgO, CaO, Na2O, K2O, P2O5] = [
    mol[place.SiO2],
    mol[place.TiO2],
    mol[place.Al2O3],
    mol[place.FeOT],
    mol[place.MnO],
    mol[place.MgO],
    mol[place.CaO],
    mol[place.Na2O],
    mol[place.K2O],
    mol[place.P2O5],
  ];
  const TA = TiO2 + Al2O3;
  const FM = FeO + MnO + MgO;
  const NK = Na2O + K2O;
  const b =
    B['SiO2+TiO2'] * (SiO2 + TiO2) +
    B['Al2O3'] * Al2O3 +
    B['FeO+MnO+P2O5'] * (FeO + MnO + P2O5) +
    B['MgO'] * MgO +
    B['CaO'] * CaO +
    B['Na2O+V'] * (Na2O + H2O) +
    B['V+ln(1+H2O)'] * (H2O + Math.log(1 + H2O)) +
    B['(SiO2+TiO2)*FM'] * (SiO2 + TiO2) * FM +
    B['(SiO2+TA+P2O5)*(NK+H2O)'] * (SiO2 + TA + P2O5) * (NK + H2O) +
    B['Al2O3*NK'] * Al2O3 * NK;
  const c =
    C['SiO2'] * SiO2 +
    C['TA'] * TA +
    C['FM'] * FM +
    C['CaO'] * CaO +
    C['NK'] * NK +
    C['ln(1+V)'] * Math.log(1 + H2O) +
    C['(Al2O3+FM+CaO-P2O5)*(NK+V)'] * (Al2O3 + FM + CaO - P2O5) * (NK + H2O);
  return { log10: A + b / (temperature + celsius - c), B: b, C: c };
}

/**
 * Viscosity of a liquid with crystals in it, relative to the liquid alone: (1 − φ/0.6)^−2.5.
 *
 * @param crystals volume fraction φ of crystals (0 ≤ φ < 0.6)
 * @returns a factor of one or more
 * @throws RangeError at or above the fraction at which crystals lock
 * @source Marsh 1981 (Einstein–Roscoe)
 */
export function suspensionFactor(crystals: number): number {
  const { most, power } = viscosityTable().crystals;
  if (!(crystals >= 0 && crystals < most))
    throw new RangeError(`suspensionFactor: crystals is ${String(crystals)}; give a volume fraction from 0 to below ${most}, where crystals lock.`);
  return (1 - crystals / most) ** power;
}
