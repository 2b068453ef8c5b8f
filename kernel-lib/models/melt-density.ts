import { majorOxides } from '../chemistry';
import { molarMass } from '../tables';
import { celsius, majorMasses, majors, place } from './liquid-state';
import { densityTable } from './melt-tables';

interface Volumes {
  readonly order: Float64Array;
  readonly dT: Float64Array;
  readonly dP: Float64Array;
}

let cached: (Volumes & { ferric: { V: number; dVdT: number; dVdP: number } }) | undefined;

/** Volumes in the majors' order; zero where the model has none. */
function volumes(): NonNullable<typeof cached> {
  if (cached !== undefined) return cached;
  const table = densityTable().silicates.volumes;
  const of = (oxide: string) => table[oxide === 'FeOT' ? 'FeO' : oxide] ?? { V: 0, dVdT: 0, dVdP: 0 };
  return (cached = {
    order: Float64Array.from(majorOxides, (oxide) => of(oxide).V),
    dT: Float64Array.from(majorOxides, (oxide) => of(oxide).dVdT),
    dP: Float64Array.from(majorOxides, (oxide) => of(oxide).dVdP),
    ferric: table.Fe2O3,
  });
}

/**
 * @internal Density of a liquid, g/cm³.
 *
 * @param oxides wt % in the majors' order, anhydrous, all iron as FeO
 * @param ferric Fe3+/ΣFe (0–1); `water` H2O in wt % of the hydrous liquid; `temperature` °C; `pressure` bar
 */
export function meltDensityOf(oxides: ArrayLike<number>, ferric: number, water: number, temperature: number, pressure: number): number {
  const table = densityTable();
  const { order, dT, dP, ferric: ferricVolume } = volumes();
  const { molar } = majorMasses();
  const warmer = temperature + celsius - table.silicates.T0;
  const squeezed = pressure - 1;
  let [mass, volume, moles, soda, titania, sum] = [0, 0, 0, 0, 0, 0];
  for (let i = 0; i < majors; i++) sum += oxides[i] || 0;
  const dry = (100 - water) / sum;
  for (let i = 0; i < majors; i++) {
    if (order[i] === 0) continue;
    const weight = (oxides[i] || 0) * dry;
    let n = weight / molar[i];
    if (i === place.FeOT && ferric > 0) {
      const pairs = (n * ferric) / 2;
      mass += pairs * molarMass('Fe2O3');
      volume += pairs * (ferricVolume.V + ferricVolume.dVdT * warmer + ferricVolume.dVdP * squeezed);
      moles += pairs;
      n *= 1 - ferric;
    }
    mass += n * molar[i];
    volume += n * (order[i] + dT[i] * warmer + dP[i] * squeezed);
    moles += n;
    if (i === place.Na2O) soda = n;
    if (i === place.TiO2) titania = n;
  }
  if (water > 0) {
    const n = water / molarMass('H2O');
    const { V, dVdT, dVdP, T0 } = table.water;
    mass += water;
    volume += n * (V + dVdT * (temperature + celsius - T0) + dVdP * squeezed);
    moles += n;
  }
  volume += (table.sodaTitania.value * soda * titania) / moles;
  return mass / volume;
}
