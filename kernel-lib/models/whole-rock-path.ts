import { findAnalyte, majorOxides } from '../chemistry';
import type { MeltType } from '../tables';
import {
  checkOwnCoefficients,
  gatherCoefficients,
  MissingCoefficientsError,
  readMeltTypes,
  type MissingCoefficient,
  type UsedCoefficient,
} from './coefficients';
import { isotopeElement } from './isotopes';
import { outsideRanges, propertySources, type LiquidThermometer } from './liquid-properties';
import { majors, place } from './liquid-state';
import { meltDensityOf } from './melt-density';
import { meltViscosityOf } from './melt-viscosity';
import { mineralOf } from './minerals';
import { amountOf } from './one-analysis';
import { buildPath, type ModelPath } from './path';
import { saturationTable } from './melt-tables';
import { zirconiumInZircon, zirconM, zirconSolubility, type ZirconModel } from './saturation';
import { meltTypeOf, silicaOfMeltTypes } from './trace-test';
import { chooseElements, readSteps } from './trace-setup';
import { followMajors, stageGrid, type MajorsPath } from './whole-rock-majors';
import { readConditions, readStages, startMajors, type WholeRockOptions } from './whole-rock-options';

/** Order in which sets are asked: the set itself, then the nearest in silica where borrowing is allowed. */
function orderFrom(set: MeltType, borrow: boolean): readonly MeltType[] {
  const lavas = silicaOfMeltTypes.map((each) => each.set);
  const at = lavas.indexOf(set);
  return borrow ? [...lavas].sort((a, b) => Math.abs(lavas.indexOf(a) - at) - Math.abs(lavas.indexOf(b) - at)) : [set];
}

interface TraceSets {
  readonly analytes: readonly string[];
  /** `tables[s][m][a]`: the coefficient of mineral m and analyte a while set s is in force. */
  readonly tables: ReadonlyMap<string, readonly (readonly UsedCoefficient[])[]>;
  readonly used: readonly UsedCoefficient[];
  readonly missing: readonly MissingCoefficient[];
}

/** Every coefficient that the path will need, over all sets that come into force; or one error with all that are missing. */
function gatherSets(
  options: WholeRockOptions,
  elements: readonly string[],
  needs: ReadonlyMap<string, readonly string[]>,
  orders: ReadonlyMap<string, readonly MeltType[]>,
  names: readonly string[],
  who: string,
): TraceSets {
  const own = options.coefficients ?? {};
  checkOwnCoefficients(own, who);
  const missing: MissingCoefficient[] = [];
  for (const [set, minerals] of needs) {
    try {
      missing.push(...gatherCoefficients({ minerals, analytes: elements, sets: orders.get(set)!, own, who }, 'covered').missing);
    } catch (error) {
      if (!(error instanceof MissingCoefficientsError)) throw error;
      missing.push(...error.missing);
    }
  }
  const lacking = new Set(missing.map(({ analyte }) => analyte));
  const analytes = elements.filter((symbol) => !lacking.has(symbol));
  if (missing.length > 0 && (options.analytes !== 'covered' || analytes.length === 0)) throw new MissingCoefficientsError(who, missing, analytes);
  const none = analytes.map(
    (analyte): UsedCoefficient => ({ mineral: '', analyte, meltType: 'supplied', value: 0, low: 0, high: 0, source: '', standing: 'supplied' }),
  );
  const tables = new Map<string, readonly (readonly UsedCoefficient[])[]>();
  const used = new Map<string, UsedCoefficient>();
  for (const [set, minerals] of needs) {
    const { used: rows } = gatherCoefficients({ minerals, analytes, sets: orders.get(set)!, own, who });
    tables.set(
      set,
      names.map((name) => (minerals.includes(mineralOf(name)) ? rows[minerals.indexOf(mineralOf(name))] : none)),
    );
    for (const each of rows.flat()) used.set(`${each.mineral}\n${each.analyte}\n${each.meltType}`, each);
  }
  return { analytes, tables, used: [...used.values()], missing };
}

/** The name of the set in force at each state. */
function setsAlong(options: WholeRockOptions, majorsPath: MajorsPath, who: string): { sets: string[]; orders: Map<string, readonly MeltType[]> } {
  const { meltType = 'by silica', borrow = 'none' } = options;
  if (borrow !== 'none' && borrow !== 'nearest') throw new RangeError(`${who}: borrow must be "none" or "nearest", not "${String(borrow)}".`);
  const orders = new Map<string, readonly MeltType[]>();
  if (meltType !== 'by silica') {
    const order = readMeltTypes(meltType, who);
    orders.set(order[0], order);
    return { sets: Array.from(majorsPath.F, () => order[0]), orders };
  }
  const sets = Array.from(majorsPath.F, (_, i) => meltTypeOf(majorsPath.liquid[i * majors + place.SiO2]));
  for (const set of sets) if (!orders.has(set)) orders.set(set, orderFrom(set, borrow === 'nearest'));
  return { sets, orders };
}

/**
 * Whole-rock crystallisation: majors by subtracting minerals and traces by D, in one path. Assemblages may change by stages, the set of
 * coefficients follows the liquid's silica, apatite and zircon join at saturation, and olivine may stay in Fe–Mg exchange with the liquid.
 *
 * @param options `from` majors (wt %) and traces (ppm); `assemblage` with `downTo`, or `stages`; `compositions` by mineral (`'An70'`, an
 *   analysis, `'exchange'` for olivine); `conditions` { temperature °C | thermometer, pressure bar, water wt %, redox }; `accessories`;
 *   `meltType` `by silica` | a set | an order; `borrow` `none` | `nearest`; `analytes`, `coefficients`, `steps` (default 100)
 * @returns the path (steps + 1 rows): `liquid` with majors (wt %, volatile-free), traces (ppm), Fo, temperature, water, ferric share, density,
 *   viscosity where conditions are given, and the labels `coefficient set`, `assemblage`, `liquid range`; `solid` of each step; `cumulate`
 * @throws MissingCoefficientsError with all that is missing over the whole path; RangeError naming the bad argument
 * @source Bryan et al. 1969 (majors); Gast 1968 (traces); Roeder & Emslie 1970; Harrison & Watson 1984; Watson & Harrison 1983; Boehnke et al. 2013
 * @example wholeRockPath({ from: suite.sample('KE-20'), assemblage: { olivine: 0.2, clinopyroxene: 0.3, plagioclase: 0.5 }, downTo: 0.6,
 *   compositions: { olivine: 'Fo80', clinopyroxene: 'Wo42En46Fs12', plagioclase: 'An75' }, analytes: ['Sr', 'Ba'], meltType: 'basalt' })
 */
export function wholeRockPath(options: WholeRockOptions): ModelPath {
  const who = 'wholeRockPath';
  if (typeof options !== 'object' || options === null)
    throw new TypeError(`${who}: give an object of options with from, assemblage, downTo and compositions.`);
  const { start, oxides, notes } = startMajors(options.from, who);
  const { stages, names, chosen } = readStages(options, who);
  const conditions = readConditions(options.conditions, who);
  const { apatite = false, zircon = false } = options.accessories ?? {};
  if ((apatite || zircon !== false) && conditions === undefined)
    throw new RangeError(`${who}: accessories need conditions: their saturation depends on temperature.`);
  const zirconModel: ZirconModel = typeof zircon === 'string' ? zircon : 'boehnke-2013';
  const steps = readSteps(options.steps, who, 100);
  const found = followMajors(
    oxides,
    stageGrid(
      stages.map(({ downTo }) => downTo),
      steps,
    ),
    stages,
    names,
    conditions,
    apatite,
    who,
  );
  const { F, liquid: majorLiquid, shares, crystals } = found;
  const size = F.length;
  const width = names.length + 1;

  const wanted = options.analytes ?? (start.analytes.some((symbol) => findAnalyte(symbol)?.kind === 'element') ? 'all' : []);
  const elements = Array.isArray(wanted) && wanted.length === 0 ? [] : chooseElements(start, wanted, who, notes);
  const { sets, orders } = setsAlong(options, found, who);
  const phases = [...names, 'apatite', 'zircon'];
  const needs = new Map<string, string[]>();
  const hasZircon = zircon !== false && elements.includes('Zr');
  if (zircon !== false && !elements.includes('Zr')) notes.push('Zircon cannot join: Zr is not among the modelled analytes.');
  for (let i = 0; i < size - 1 && elements.length > 0; i++) {
    const list = needs.get(sets[i]) ?? [];
    for (let m = 0; m < width; m++) if (shares[i * width + m] > 0 && !list.includes(mineralOf(phases[m]))) list.push(mineralOf(phases[m]));
    if (hasZircon && !list.includes('zircon') && couldSaturate(found, i, start, zirconModel)) list.push('zircon');
    needs.set(sets[i], list);
  }
  const traces = gatherSets(options, elements, needs, orders, phases, who);
  if (traces.missing.length > 0)
    notes.push(`Not modelled, because a coefficient is missing: ${elements.filter((symbol) => !traces.analytes.includes(symbol)).join(', ')}.`);
  const carried = followTraces(traces, found, sets, start, hasZircon ? zirconModel : undefined, width, phases);
  notes.push(...found.notes, ...carried.notes);
  if (traces.analytes.length > 0) notes.push(`Coefficient sets in force: ${changesOf(sets, F)}.`);

  const liquid = new Map<string, Float64Array>();
  const solid = new Map<string, Float64Array>();
  const cumulate = new Map<string, Float64Array>();
  const column = (symbol: string, of: Float64Array, stride: number, at: number, crystal: (step: number) => number) => {
    const [values, formed, all] = [new Float64Array(size), new Float64Array(size), new Float64Array(size)];
    for (let i = 0; i < size; i++) {
      values[i] = of[i * stride + at];
      formed[i] = size === 1 ? NaN : crystal(Math.min(i, size - 2));
      // Everything that is not in the liquid any more is in the crystals.
      all[i] = i === 0 ? formed[0] : (values[0] - F[i] * values[i]) / (1 - F[i]);
    }
    liquid.set(symbol, values);
    solid.set(symbol, formed);
    cumulate.set(symbol, all);
  };
  majorOxides.forEach((oxide, j) => column(oxide, majorLiquid, majors, j, (step) => crystals[step * majors + j]));
  const T = traces.analytes.length;
  traces.analytes.forEach((symbol, a) => column(symbol, carried.liquid, T, a, (step) => carried.crystals[step * T + a]));
  for (const symbol of start.analytes)
    if (isotopeElement(symbol) !== undefined && Number.isFinite(amountOf(start, symbol)))
      liquid.set(symbol, new Float64Array(size).fill(amountOf(start, symbol)));

  const { quantities, flags } = propertiesAlong(found, conditions);
  const isHydrous = names.some((name) => ['amphibole', 'biotite'].includes(mineralOf(name)));
  if (isHydrous && conditions !== undefined && conditions.water > 0)
    notes.push('The water in amphibole and biotite is not taken from the liquid: its water is an upper limit.');
  const table = saturationTable();
  const thermometer = typeof conditions?.temperature === 'string' ? (conditions.temperature as LiquidThermometer) : undefined;
  return buildPath({
    who,
    process: 'Whole-rock crystallisation',
    F,
    meaning: 'liquid left',
    liquid,
    solid,
    cumulate,
    quantities,
    coefficients: traces.used,
    notes,
    lineage: start.lineage,
    labels: {
      'coefficient set': sets,
      assemblage: Array.from(F, (_, i) => phases.filter((__, m) => carried.shares[Math.min(i, size - 2) * phases.length + m] > 0).join(' + ')),
      ...(conditions === undefined ? {} : { 'liquid range': flags }),
    },
    detail: {
      stages: stages.map((stage) => ({
        downTo: stage.downTo,
        assemblage: Object.fromEntries(stage.places.map((at, m) => [names[at], stage.shares[m]])),
      })),
      compositions: chosen.map(({ name, label, source, standing }) => [name, label, source, standing]),
      conditions:
        conditions === undefined ? null : { ...conditions, temperature: conditions.temperature as string, redox: conditions.redox as number },
      accessories: { apatite, zircon: zircon === false ? false : zirconModel },
      sets: [...new Set(sets)],
    },
    sources: [
      'bryan_1969',
      'gast_1968',
      ...chosen.filter(({ standing }) => standing !== 'supplied').map(({ source }) => source),
      ...(conditions === undefined ? [] : propertySources(thermometer, conditions.redox)),
      ...(found.Fo.some(Number.isFinite) ? ['roeder_emslie_1970'] : []),
      ...(apatite ? [table.apatite.source] : []),
      ...(hasZircon ? [table.zircon[zirconModel].source] : []),
    ],
    tables: [
      'mineral-compositions.csv',
      ...(conditions === undefined ? [] : ['thermometers.json', 'melt-density.json', 'melt-viscosity.json', 'iron-oxidation.json']),
      ...(apatite || hasZircon ? ['saturation.json'] : []),
    ],
  });
}

/** Where a label changes along the path: `basalt from F = 1, andesite from F = 0.86`. */
function changesOf(labels: readonly string[], F: Float64Array): string {
  return labels.flatMap((label, i) => (i === 0 || labels[i - 1] !== label ? [`${label} from F = ${Number(F[i].toFixed(3))}`] : [])).join(', ');
}

/** Whether zircon could be at saturation at a state, with Zr as enriched as it can be: none of it in any crystal so far. */
function couldSaturate(found: MajorsPath, state: number, start: Parameters<typeof amountOf>[0], model: ZirconModel): boolean {
  const M = zirconM(found.liquid.subarray((state + 1) * majors, (state + 2) * majors));
  return amountOf(start, 'Zr') / found.F[state + 1] > zirconSolubility(M, found.temperature[state + 1], model);
}

function followTraces(
  traces: TraceSets,
  found: MajorsPath,
  sets: readonly string[],
  start: Parameters<typeof amountOf>[0],
  zircon: ZirconModel | undefined,
  width: number,
  phases: readonly string[],
) {
  const { analytes, tables } = traces;
  const { F, shares: majorShares } = found;
  const T = analytes.length;
  const size = F.length;
  const liquid = new Float64Array(size * T);
  const crystals = new Float64Array(Math.max(0, size - 1) * T);
  const shares = new Float64Array(Math.max(1, size - 1) * phases.length);
  const notes: string[] = [];
  const zirconium = analytes.indexOf('Zr');
  const inZircon = zirconiumInZircon();
  for (let a = 0; a < T; a++) liquid[a] = amountOf(start, analytes[a]);
  let zirconAt = NaN;
  for (let i = 0; i < size - 1; i++) {
    const K = tables.get(sets[i]);
    const [before, after] = [F[i], F[i + 1]];
    const step = before - after;
    for (let m = 0; m < width; m++) shares[i * phases.length + m] = majorShares[i * width + m];
    const bulk = (a: number): number => {
      let D = 0;
      for (let m = 0; m < width; m++) if (majorShares[i * width + m] > 0) D += majorShares[i * width + m] * K![m][a].value;
      return D;
    };
    let share = 0;
    if (zircon !== undefined && zirconium >= 0) {
      // The majors are known beforehand, so saturation is that of the state after the step.
      const M = zirconM(found.liquid.subarray((i + 1) * majors, (i + 2) * majors));
      const limit = zirconSolubility(M, found.temperature[i + 1], zircon);
      const amount = after * liquid[i * T + zirconium] * (after / before) ** (bulk(zirconium) - 1);
      if (amount > limit * after) {
        share = (amount - limit * after) / (step * inZircon);
        if (Number.isNaN(zirconAt)) zirconAt = before;
        shares[i * phases.length + phases.length - 1] = share;
      }
    }
    for (let a = 0; a < T; a++) {
      const C = liquid[i * T + a];
      const D = (1 - share) * bulk(a) + (share > 0 && a !== zirconium ? share * K![phases.length - 1][a].value : 0);
      let next = C * (after / before) ** (D - 1);
      if (share > 0 && a === zirconium) next -= (share * step * inZircon) / after;
      liquid[(i + 1) * T + a] = next;
      crystals[i * T + a] = (before * C - after * next) / step;
    }
  }
  if (!Number.isNaN(zirconAt)) notes.push(`Zircon joins at F = ${zirconAt.toFixed(3)}.`);
  return { liquid, crystals, shares, notes };
}

function propertiesAlong(
  found: MajorsPath,
  conditions: ReturnType<typeof readConditions>,
): { quantities: Map<string, { unit: string; values: Float64Array }>; flags: string[] } {
  const quantities = new Map<string, { unit: string; values: Float64Array }>();
  const size = found.F.length;
  const flags = new Array<string>(size).fill('');
  if (found.Fo.some(Number.isFinite)) quantities.set('Fo', { unit: '', values: found.Fo.map((value) => 100 * value) });
  if (conditions === undefined) return { quantities, flags };
  const [density, viscosity] = [new Float64Array(size), new Float64Array(size)];
  const thermometer = typeof conditions.temperature === 'string' ? conditions.temperature : undefined;
  for (let i = 0; i < size; i++) {
    const oxides = found.liquid.subarray(i * majors, (i + 1) * majors);
    density[i] = meltDensityOf(oxides, found.ferric[i], found.water[i], found.temperature[i], conditions.pressure);
    viscosity[i] = meltViscosityOf(oxides, found.water[i], found.temperature[i]).log10;
    flags[i] = outsideRanges(oxides, thermometer, found.water[i], found.temperature[i], conditions.pressure).join('; ');
  }
  quantities.set('temperature', { unit: '°C', values: found.temperature });
  quantities.set('water', { unit: 'wt%', values: found.water });
  quantities.set('ferric share', { unit: '', values: found.ferric });
  quantities.set('density', { unit: 'g/cm³', values: density });
  quantities.set('viscosity', { unit: 'log10 Pa s', values: viscosity });
  return { quantities, flags };
}
