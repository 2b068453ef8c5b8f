import { equilibriumLiquid, equilibriumSolid, rayleighCumulate, rayleighLiquid, rayleighSolid } from '../chemistry';
import { buildPath, evenly, type ModelPath } from './path';
import { follow, readNumber, setUpTrace, withConstantIsotopes, type TraceModelOptions } from './trace-setup';

/** What `crystallise` takes. */
export interface CrystalliseOptions extends TraceModelOptions {
  /** Fraction of liquid left at the end of the path (0 to 1). */
  readonly downTo: number;
  /** `rayleigh` (default): crystals leave as they form. `equilibrium`: all crystals stay in equilibrium with the liquid. */
  readonly mode?: 'rayleigh' | 'equilibrium';
}

/**
 * Trace elements of a liquid that crystallises a fixed assemblage, by the closed forms.
 *
 * Every element needs a coefficient for every mineral: what is missing stops the model with a list, unless `analytes` is `covered` or a
 * list of your own. Isotope ratios of the start stay as they are. Majors: see `wholeRockPath`.
 *
 * @param options `from` one analysis (elements in ppm); `assemblage` mass fractions of the minerals; `downTo` last F (0–1); `mode`
 *   `rayleigh` | `equilibrium`; `meltType` `basalt` (default) | `andesite` | `dacite` | `rhyolite` | `mantle-melting`, or an order of
 *   preference; `analytes` `all` | `covered` | list; `coefficients` of your own; `steps` (default 60)
 * @returns the path: `liquid`, `solid` (forming at each step) and `cumulate` (all so far; in equilibrium mode the solid itself), each a
 *   suite of steps + 1 rows in ppm; `coefficients` used with source and standing
 * @throws MissingCoefficientsError; RangeError or TypeError naming the bad argument
 * @source Neumann et al. 1954; Gast 1968; Shaw 1970. Holds where D stays the same along the path
 * @example crystallise({ from: { Sr: 520, Ba: 210 }, assemblage: { olivine: 0.15, clinopyroxene: 0.35, plagioclase: 0.5 }, downTo: 0.4 })
 */
export function crystallise(options: CrystalliseOptions): ModelPath {
  const who = 'crystallise';
  const setup = setUpTrace(options, who);
  const downTo = readNumber(options.downTo, who, 'downTo', { from: 0, to: 1, open: 'both' });
  const mode = options.mode ?? 'rayleigh';
  if (mode !== 'rayleigh' && mode !== 'equilibrium') throw new RangeError(`${who}: mode must be "rayleigh" or "equilibrium", not "${String(mode)}".`);
  const F = evenly(1, downTo, setup.steps);
  const isRayleigh = mode === 'rayleigh';
  return buildPath({
    who,
    process: isRayleigh ? 'Rayleigh crystallisation' : 'Equilibrium crystallisation',
    F,
    meaning: 'liquid left',
    liquid: withConstantIsotopes(follow(setup, F, isRayleigh ? rayleighLiquid : equilibriumLiquid), setup, F.length),
    solid: withConstantIsotopes(follow(setup, F, isRayleigh ? rayleighSolid : equilibriumSolid), setup, F.length),
    cumulate: withConstantIsotopes(follow(setup, F, isRayleigh ? rayleighCumulate : equilibriumSolid), setup, F.length),
    coefficients: setup.used,
    notes: setup.notes,
    lineage: setup.start.lineage,
    detail: { ...setup.detail, downTo, mode },
    sources: isRayleigh ? ['neumann_1954', 'gast_1968'] : ['shaw_1970'],
  });
}
