/** Mass-fraction units an analysis may be reported in. `wt%` = g per 100 g; `ppm` = µg/g; `ppb` = ng/g; `ppt` = pg/g. */
export type MassUnit = 'wt%' | 'ppm' | 'ppb' | 'ppt';

/** How many ppm (µg/g) one of each unit is: definitions, not measurements. */
const inPpm: Readonly<Record<MassUnit, number>> = { 'wt%': 1e4, ppm: 1, ppb: 1e-3, ppt: 1e-6 };

export const massUnits: readonly MassUnit[] = ['wt%', 'ppm', 'ppb', 'ppt'];

export function isMassUnit(unit: string): unit is MassUnit {
  return Object.hasOwn(inPpm, unit);
}

/**
 * Factor that turns a mass fraction in one unit into another: value × factor.
 *
 * @example massUnitFactor('wt%', 'ppm') // 10000
 */
export function massUnitFactor(from: MassUnit, to: MassUnit): number {
  return inPpm[from] / inPpm[to];
}
