import { majorOxides } from '../chemistry';
import { volatileFree } from '../recast';
import type { Suite } from '../suite';
import type { MeltType } from '../tables';
import { readAssemblage, type Assemblage, type OwnCoefficients } from './coefficients';
import { checkRedox, type LiquidRedox, type LiquidThermometer } from './liquid-properties';
import { majors } from './liquid-state';
import { chooseMineral, mineralOf, type ChosenMineral, type MineralChoice } from './minerals';
import { amountOf, oneAnalysis, type Composition } from './one-analysis';
import type { ZirconModel } from './saturation';
import { readNumber } from './trace-setup';

/** A mineral's composition on a whole-rock path; `exchange` (olivine only) is the olivine in equilibrium with the liquid at each step. */
export type PathMineral = MineralChoice | 'exchange';

/** A stretch of the path with one assemblage. */
export interface CrystalStage {
  /** Mass fractions of the crystallising minerals. */
  readonly assemblage: Assemblage;
  /** Compositions that differ from the path's own in this stage. */
  readonly compositions?: Readonly<Record<string, PathMineral>>;
  /** Fraction of liquid left at the end of the stage, of the liquid at the very start. */
  readonly downTo: number;
}

/** Temperature, pressure, water and oxidation along a whole-rock path. */
export interface PathConditions {
  /** °C: one number, a fall `{ from, to }` along the path, or a thermometer: `magnesia` | `liquid` | `olivine-liquid`. */
  readonly temperature: number | { readonly from: number; readonly to: number } | LiquidThermometer;
  /** bar (default 1). */
  readonly pressure?: number;
  /** H2O of the starting liquid, wt % (default 0); it stays in the liquid up to saturation. */
  readonly water?: number;
  /** Fe3+/ΣFe, held along the path, or a buffer (default 0). */
  readonly redox?: LiquidRedox;
}

/** What `wholeRockPath` takes. */
export interface WholeRockOptions {
  /** The liquid at the start: majors in wt %, traces in ppm. */
  readonly from: Composition;
  /** One assemblage all the way (with downTo) … */
  readonly assemblage?: Assemblage;
  readonly downTo?: number;
  /** … or stages, each going on from the last. */
  readonly stages?: readonly CrystalStage[];
  /** A composition for every mineral. */
  readonly compositions: Readonly<Record<string, PathMineral>>;
  /** Accessories that join when the liquid is saturated with them; they need conditions. */
  readonly accessories?: { readonly apatite?: boolean; readonly zircon?: boolean | ZirconModel };
  readonly conditions?: PathConditions;
  /** `by silica` (default): the set follows the liquid's silica; or one set, or an order of preference, all along. */
  readonly meltType?: 'by silica' | MeltType | readonly MeltType[];
  /** With `by silica`: `none` (default) stops at a coefficient that the set lacks; `nearest` borrows it from the nearest set. */
  readonly borrow?: 'none' | 'nearest';
  /** Elements to carry (default `all` of the start; `[]` for majors alone). */
  readonly analytes?: 'all' | 'covered' | readonly string[];
  readonly coefficients?: OwnCoefficients;
  /** Steps from start to end (default 100). */
  readonly steps?: number;
}

/** @internal A mineral's majors in their fixed order, wt %. */
export function majorsOf(chosen: ChosenMineral): Float64Array {
  return Float64Array.from(majorOxides, (oxide) => chosen.oxides.get(oxide) ?? 0);
}

/** @internal One stage, read: minerals by place in the path's list. */
export interface ReadStage {
  readonly downTo: number;
  readonly places: readonly number[];
  readonly shares: Float64Array;
  /** Composition of each mineral in the stage; undefined for exchange. */
  readonly compositions: readonly (Float64Array | undefined)[];
}

/** @internal What a whole-rock path needs of its start. */
export function startMajors(from: Composition, who: string): { start: Suite; oxides: Float64Array; notes: string[] } {
  const start = oneAnalysis(from, who, 'from');
  const dry = volatileFree(start);
  if (!Number.isFinite(dry.values('SumAsGiven')[0])) {
    throw new RangeError(
      `${who}: from lacks an oxide that the volatile-free sum needs (SiO2, Al2O3, MgO, CaO, Na2O, K2O, iron). It holds: ` +
        `${start.analytes.join(', ')}.`,
    );
  }
  const lacking = majorOxides.filter((oxide) => !Number.isFinite(amountOf(dry, oxide)));
  const oxides = new Float64Array(majors);
  majorOxides.forEach((oxide, i) => (oxides[i] = amountOf(dry, oxide) || 0));
  return { start: dry, oxides, notes: lacking.length === 0 ? [] : [`No usable ${lacking.join(', ')} in the start: not modelled.`] };
}

/** @internal The stages with their minerals. */
export function readStages(
  options: WholeRockOptions,
  who: string,
): { stages: readonly ReadStage[]; names: readonly string[]; chosen: readonly ChosenMineral[]; usesExchange: boolean } {
  if ((options.stages === undefined) === (options.assemblage === undefined))
    throw new RangeError(`${who}: give either assemblage with downTo, or stages.`);
  const given = options.stages ?? [{ assemblage: options.assemblage!, downTo: options.downTo! }];
  if (!Array.isArray(given) || given.length === 0) throw new RangeError(`${who}: stages must hold at least one stage.`);
  const names: string[] = [];
  const chosen: ChosenMineral[] = [];
  let [above, usesExchange] = [1, false];
  const stages = given.map((stage, s): ReadStage => {
    const argument = options.stages === undefined ? '' : `stages[${s}].`;
    const downTo = readNumber(stage?.downTo, who, `${argument}downTo`, { from: 0, to: above, open: 'both' });
    above = downTo;
    const { minerals, shares } = readAssemblage(stage.assemblage, who, `${argument}assemblage`);
    const compositions = minerals.map((name) => {
      const choice = stage.compositions?.[name] ?? options.compositions?.[name];
      if (choice === 'exchange') {
        if (mineralOf(name) !== 'olivine') throw new RangeError(`${who}: "exchange" is for olivine; give ${name} a composition.`);
        if (options.conditions === undefined)
          throw new RangeError(`${who}: olivine in exchange with the liquid needs conditions, with redox for the liquid's ferrous iron.`);
        usesExchange = true;
        return undefined;
      }
      const mineral = chooseMineral(name, choice, who);
      chosen.push(mineral);
      return majorsOf(mineral);
    });
    for (const name of minerals) if (!names.includes(name)) names.push(name);
    return { downTo, places: minerals.map((name) => names.indexOf(name)), shares, compositions };
  });
  return { stages, names, chosen, usesExchange };
}

/** @internal Checks the conditions of a path. */
export function readConditions(conditions: PathConditions | undefined, who: string): Required<PathConditions> | undefined {
  if (conditions === undefined) return undefined;
  const { temperature, pressure = 1, water = 0, redox = 0 } = conditions;
  if (typeof temperature === 'number') readNumber(temperature, who, 'conditions.temperature', { from: 300, to: 2500 });
  else if (typeof temperature === 'object' && temperature !== null) {
    readNumber(temperature.from, who, 'conditions.temperature.from', { from: 300, to: 2500 });
    readNumber(temperature.to, who, 'conditions.temperature.to', { from: 300, to: 2500 });
  } else if (!['magnesia', 'liquid', 'olivine-liquid'].includes(temperature)) {
    throw new RangeError(`${who}: conditions.temperature must be °C, { from, to }, or "magnesia", "liquid" or "olivine-liquid".`);
  }
  readNumber(pressure, who, 'conditions.pressure', { from: 0, to: 1e5 });
  readNumber(water, who, 'conditions.water', { from: 0, to: 30 });
  checkRedox(redox, who);
  return { temperature, pressure, water, redox };
}
