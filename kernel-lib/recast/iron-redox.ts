import { molarMass } from '../tables';
import { ironTables } from './iron-tables';

/** An oxygen buffer whose curve is in the tables. */
export type OxygenBuffer = 'FMQ' | 'NNO' | 'IW';

export const oxygenBuffers: readonly OxygenBuffer[] = ['FMQ', 'NNO', 'IW'];

/**
 * Oxygen fugacity of a buffer.
 *
 * @param buffer `FMQ`, `NNO` or `IW`
 * @param temperature °C
 * @param pressure bar (default 1)
 * @param offset log10 units above the buffer (default 0)
 * @returns log10 fO2, fO2 in bar
 * @throws RangeError for an unknown buffer, or numbers that are not finite
 * @source Frost 1991
 * @example bufferFugacity('NNO', 1200) // −7.56
 */
export function bufferFugacity(buffer: OxygenBuffer, temperature: number, pressure = 1, offset = 0): number {
  if (!oxygenBuffers.includes(buffer))
    throw new RangeError(`bufferFugacity: buffer must be one of ${oxygenBuffers.join(', ')}, not "${String(buffer)}".`);
  if (![temperature, pressure, offset].every(Number.isFinite) || temperature <= -273.15) {
    throw new RangeError(`bufferFugacity: temperature (°C), pressure (bar) and offset must be numbers; got ${temperature}, ${pressure}, ${offset}.`);
  }
  const { A, B, C } = ironTables().buffers[buffer];
  const kelvin = temperature + 273.15;
  return A / kelvin + B + (C * (pressure - 1)) / kelvin + offset;
}

/** Oxides of the mole fractions, total iron as FeO, without water. */
export const meltOxides = ['SiO2', 'TiO2', 'Al2O3', 'FeOT', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'] as const;

/**
 * Equilibrium of ferric and ferrous iron in a silicate melt: ln(X Fe2O3 / X FeO).
 *
 * @param oxides wt % of the melt's oxides, total iron as FeOT; missing ones count as 0
 * @param state `temperature` in °C, `pressure` in bar, `log10fO2` (fO2 in bar)
 * @returns ln of the molar ratio
 * @source Kress & Carmichael 1991, equation 7; calibrated for natural melts at 1200–1630 °C and 1 bar, with a pressure term
 */
export function ferricFerrousRatio(
  oxides: Readonly<Record<string, number>>,
  state: { temperature: number; pressure: number; log10fO2: number },
): number {
  const { a, b, c, d, e, f, g, h, T0 } = ironTables().meltEquilibrium;
  const T = state.temperature + 273.15;
  const P = state.pressure * 1e5;
  let moles = 0;
  for (const oxide of meltOxides) moles += (oxides[oxide] || 0) / molarMass(oxide);
  let composition = 0;
  for (const [oxide, factor] of Object.entries(d)) composition += (factor * (oxides[oxide] || 0)) / molarMass(oxide) / moles;
  return (
    a * state.log10fO2 * Math.LN10 +
    b / T +
    c +
    composition +
    e * (1 - T0 / T - Math.log(T / T0)) +
    (f * P) / T +
    (g * (T - T0) * P) / T +
    (h * P * P) / T
  );
}
