import { majorOxides } from '../chemistry';
import { bufferFugacity, ferricFerrousRatio, volatileFree, type OxygenBuffer } from '../recast';
import { derivedColumn, resolveColumn, step, type Suite } from '../suite';
import { celsius, majors, place } from './liquid-state';
import { meltDensityOf } from './melt-density';
import { densityTable, thermometers, viscosityTable } from './melt-tables';
import { meltViscosityOf } from './melt-viscosity';
import { equilibriumOlivine, liquidTemperature, magnesiaTemperature, olivineLiquidTemperature, waterAtSaturation } from './thermometry';
import { readNumber } from './trace-setup';

/** A liquid thermometer: from MgO alone, from the whole liquid, or with the olivine that would be in equilibrium. */
export type LiquidThermometer = 'magnesia' | 'liquid' | 'olivine-liquid';

/** The liquid's oxidation: Fe3+/ΣFe as a number, or a buffer with log10 units above it. */
export type LiquidRedox = number | { readonly buffer: OxygenBuffer; readonly offset?: number };

/** The conditions of a liquid. */
export interface LiquidConditions {
  /** °C as a number, the name of a column in °C, or a thermometer. */
  readonly temperature: number | string;
  /** bar (default 1). */
  readonly pressure?: number;
  /** H2O in wt % as a number, or the name of a column (default: the column `H2O`, and 0 where there is none). */
  readonly water?: number | string;
  /** Default 0: all iron ferrous, which is stated in the lineage. */
  readonly redox?: LiquidRedox;
}

const buffers: readonly OxygenBuffer[] = ['FMQ', 'NNO', 'IW'];
const thermometerNames: readonly string[] = ['magnesia', 'liquid', 'olivine-liquid'];

/** @internal Checks how oxidation is given. */
export function checkRedox(redox: LiquidRedox, who: string): void {
  if (typeof redox === 'number') {
    readNumber(redox, who, 'redox', { from: 0, to: 1 });
    return;
  }
  if (typeof redox !== 'object' || redox === null || !buffers.includes(redox.buffer))
    throw new RangeError(`${who}: redox must be Fe3+/ΣFe from 0 to 1, or { buffer: ${buffers.map((name) => `"${name}"`).join(' | ')}, offset }.`);
  if (redox.offset !== undefined) readNumber(redox.offset, who, 'redox.offset', { from: -10, to: 10 });
}

/** @internal Fe3+/ΣFe of a liquid (majors' order, wt %) at a temperature (°C) and pressure (bar). */
export function ferricShareOf(oxides: ArrayLike<number>, redox: LiquidRedox, temperature: number, pressure: number): number {
  if (typeof redox === 'number') return redox;
  const named: Record<string, number> = {};
  for (let i = 0; i < majors; i++) named[majorOxides[i]] = oxides[i];
  const log10fO2 = bufferFugacity(redox.buffer, temperature, pressure, redox.offset ?? 0);
  const ratio = Math.exp(ferricFerrousRatio(named, { temperature, pressure, log10fO2 }));
  return (2 * ratio) / (1 + 2 * ratio);
}

/**
 * @internal Temperature (°C) and Fe3+/ΣFe of one liquid. The olivine thermometer and the redox state depend on each other, so they settle together.
 */
export function settle(
  oxides: ArrayLike<number>,
  thermometer: LiquidThermometer,
  water: number,
  pressure: number,
  redox: LiquidRedox,
): { temperature: number; ferric: number } {
  let temperature = thermometer === 'magnesia' ? magnesiaTemperature(oxides) : liquidTemperature(oxides, water);
  let ferric = ferricShareOf(oxides, redox, temperature, pressure);
  if (thermometer !== 'olivine-liquid') return { temperature, ferric };
  const { value: Kd } = thermometers().exchange;
  for (let round = 0; round < 8; round++) {
    const next = olivineLiquidTemperature(oxides, equilibriumOlivine(oxides, ferric, Kd), pressure, water);
    const done = Math.abs(next - temperature) < 1e-4;
    temperature = next;
    ferric = ferricShareOf(oxides, redox, temperature, pressure);
    if (done) break;
  }
  return { temperature, ferric };
}

/** @internal What of a liquid is outside the published ranges of the methods used. */
export function outsideRanges(
  oxides: ArrayLike<number>,
  thermometer: string | undefined,
  water: number,
  temperature: number,
  pressure: number,
): string[] {
  const flags: string[] = [];
  const table = thermometers();
  const of: Readonly<Record<string, number>> = { MgO: oxides[place.MgO], SiO2: oxides[place.SiO2], H2O: water };
  const ranges =
    thermometer === 'magnesia'
      ? table.magnesia.range
      : thermometer === 'liquid'
        ? table.liquid.range
        : thermometer === 'olivine-liquid'
          ? table.olivineLiquid.range
          : {};
  for (const [what, [low, high]] of Object.entries(ranges))
    if (of[what] < low || of[what] > high) flags.push(`temperature: ${what} outside ${low}–${high} wt %`);
  const [dryLow, dryHigh] = densityTable().range.temperature;
  if (temperature < dryLow || temperature > dryHigh) flags.push(`density: extrapolated from ${dryLow}–${dryHigh} °C`);
  const [low, high] = viscosityTable().range.temperature;
  if (temperature < low || temperature > high) flags.push(`viscosity: outside ${low}–${high} °C`);
  if (water > 0 && water > waterAtSaturation(pressure)) flags.push('water: above saturation at this pressure');
  return flags;
}

/**
 * Physical properties of analyses taken as liquids: temperature, water, Fe3+/ΣFe, density and viscosity.
 *
 * @param suite n analyses with majors in wt %: a suite, or a path's `liquid`
 * @param conditions `temperature` °C, a column, or `magnesia` | `liquid` | `olivine-liquid`; `pressure` bar (default 1); `water` wt % or a column;
 *   `redox` Fe3+/ΣFe or `{ buffer: 'FMQ' | 'NNO' | 'IW', offset }`
 * @returns the suite with `temperature` (°C), `water` (wt %), `ferric share` (Fe3+/ΣFe, 0–1), `density` (g/cm³), `viscosity` (log10 Pa s), all n
 *   cells, and the label `liquid range`: what is outside a method's published range, '' where nothing is
 * @throws RangeError naming the bad argument, or a column that is not there
 * @source Helz & Thornber 1987; Putirka 2008; Kress & Carmichael 1991; Lange & Carmichael 1990; Ochs & Lange 1999; Giordano et al. 2008
 * @example withLiquidProperties(suite, { temperature: 'olivine-liquid', pressure: 2000, water: 2, redox: { buffer: 'NNO' } }).values('viscosity')
 */
export function withLiquidProperties(suite: Suite, conditions: LiquidConditions): Suite {
  const who = 'withLiquidProperties';
  const { pressure = 1, redox = 0 } = conditions ?? {};
  readNumber(pressure, who, 'pressure', { from: 0, to: 1e5 });
  checkRedox(redox, who);
  const { temperature } = conditions ?? {};
  const isThermometer = typeof temperature === 'string' && thermometerNames.includes(temperature);
  if (typeof temperature === 'number') readNumber(temperature, who, 'temperature', { from: 300, to: 2500 });
  else if (typeof temperature !== 'string')
    throw new RangeError(`${who}: temperature must be °C, the name of a column, or one of ${thermometerNames.join(', ')}.`);
  const temperatures = typeof temperature === 'string' && !isThermometer ? suite.column(temperature).values : undefined;
  const { water = resolveColumn(suite, 'H2O') === undefined ? 0 : 'H2O' } = conditions;
  if (typeof water === 'number') readNumber(water, who, 'water', { from: 0, to: 30 });
  const waters = typeof water === 'string' ? (resolveColumn(suite, water) ?? suite.column(water)).values : undefined;
  const dry = volatileFree(suite);
  const columns = majorOxides.map((oxide) => resolveColumn(dry, oxide)?.values);
  const size = suite.size;
  const [T, H2O, share, density, viscosity] = Array.from({ length: 5 }, () => new Float64Array(size).fill(NaN));
  const flags = new Array<string>(size).fill('');
  const oxides = new Float64Array(majors);
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < majors; j++) oxides[j] = columns[j]?.[i] || 0;
    if (!(oxides[place.SiO2] > 0)) continue;
    H2O[i] = waters?.[i] ?? (water as number);
    if (!Number.isFinite(H2O[i])) continue;
    if (isThermometer) {
      const settled = settle(oxides, temperature as LiquidThermometer, H2O[i], pressure, redox);
      [T[i], share[i]] = [settled.temperature, settled.ferric];
    } else {
      T[i] = temperatures?.[i] ?? (temperature as number);
      if (!(T[i] > -celsius)) continue;
      share[i] = ferricShareOf(oxides, redox, T[i], pressure);
    }
    density[i] = meltDensityOf(oxides, share[i], H2O[i], T[i], pressure);
    viscosity[i] = meltViscosityOf(oxides, H2O[i], T[i]).log10;
    flags[i] = outsideRanges(oxides, isThermometer ? (temperature as string) : undefined, H2O[i], T[i], pressure).join('; ');
  }
  const sources = propertySources(isThermometer ? (temperature as LiquidThermometer) : undefined, redox);
  const because = step(
    who,
    { temperature, pressure, water, redox: typeof redox === 'number' ? redox : { buffer: redox.buffer, offset: redox.offset ?? 0 } },
    {
      sources,
      tables: ['thermometers.json', 'melt-density.json', 'melt-viscosity.json', 'iron-oxidation.json', 'atomic-weights.csv'],
      fromMemory: [
        ...(isThermometer ? [`constants of the thermometer ${String(temperature)} (thermometers.json)`] : []),
        ...(densityTable().silicates.standing === 'from memory' ? ['partial volumes of melt density (melt-density.json)'] : []),
        ...(viscosityTable().standing === 'from memory' ? ['constants of melt viscosity (melt-viscosity.json)'] : []),
      ],
      says: `Temperature, ferric share, density and viscosity of the liquids were computed at ${pressure} bar.`,
    },
  );
  return suite
    .with(
      [
        derivedColumn('temperature', T, '°C'),
        derivedColumn('water', H2O, 'wt%'),
        derivedColumn('ferric share', share, ''),
        derivedColumn('density', density, 'g/cm³'),
        derivedColumn('viscosity', viscosity, 'log10 Pa s'),
      ],
      because,
    )
    .withLabels({ 'liquid range': flags });
}

/** @internal Source keys of the methods behind a liquid's properties. */
export function propertySources(thermometer: LiquidThermometer | undefined, redox: LiquidRedox): readonly string[] {
  const table = thermometers();
  const { silicates, sodaTitania, water } = densityTable();
  return [
    ...(thermometer === 'magnesia'
      ? [table.magnesia.source]
      : thermometer === 'liquid'
        ? [table.liquid.source]
        : thermometer === 'olivine-liquid'
          ? [table.olivineLiquid.source, table.exchange.source]
          : []),
    ...(typeof redox === 'number' ? [] : ['kress_carmichael_1991', 'frost_br_1991']),
    silicates.source,
    sodaTitania.source,
    water.source,
    viscosityTable().source,
  ];
}
