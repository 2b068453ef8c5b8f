import { majorOxides } from '../chemistry';
import { showAs, type Showable, type TableCell } from '../display';
import { derivedColumn, step, suiteOf, type Suite, type Traced } from '../suite';
import type { MeltType } from '../tables';
import { gatherCoefficients, readMeltTypes, type OwnCoefficients } from './coefficients';
import { checkRedox, ferricShareOf, type LiquidRedox } from './liquid-properties';
import { majors, majorMasses, place } from './liquid-state';
import { thermometers } from './melt-tables';
import { amountOf, type Composition } from './one-analysis';
import { buildPath, describeCoefficients, type ModelPath } from './path';
import { equilibriumOlivine, liquidTemperature, olivineLiquidTemperature } from './thermometry';
import { chooseElements, readNumber } from './trace-setup';
import { olivineOxides } from './whole-rock-majors';
import { startMajors } from './whole-rock-options';

/** What `primaryMelt` takes. */
export interface PrimaryMeltOptions {
  /** The lava: majors in wt %, traces in ppm. It should have crystallised nothing but olivine. */
  readonly from: Composition;
  /** When to stop: the olivine in equilibrium reaches this Fo (0–100), or the liquid this Mg-number (100·Mg/(Mg + Fe²⁺)). */
  readonly until: { readonly Fo: number } | { readonly magnesiumNumber: number };
  /** Fe3+/ΣFe of the lava, whose ferric iron then stays while olivine brings ferrous iron; or a buffer held all along. */
  readonly redox: LiquidRedox;
  /** bar (default 10000 = 1 GPa), for the olivine–liquid temperature. */
  readonly pressure?: number;
  /** H2O of the lava, wt % (default 0); it is diluted as olivine is added. */
  readonly water?: number;
  /** Fe–Mg exchange of olivine and liquid (default 0.30). */
  readonly Kd?: number;
  /** Olivine added a step, wt % of the liquid (default 0.1). */
  readonly stepSize?: number;
  /** Most olivine to add, wt % of the lava (default 50). */
  readonly most?: number;
  /** Elements to carry along (default none); each needs D for olivine. */
  readonly analytes?: 'all' | 'covered' | readonly string[];
  readonly meltType?: MeltType | readonly MeltType[];
  readonly coefficients?: OwnCoefficients;
}

/** An estimate of a primary melt. */
export interface PrimaryMelt extends Traced, Showable {
  /** The melt: one row, majors in wt % (volatile-free, iron as FeOT), traces in ppm. */
  readonly melt: Suite;
  /** Olivine added, wt % of the lava. */
  readonly olivineAdded: number;
  /** Fo of the olivine in equilibrium with it (0–100). */
  readonly Fo: number;
  readonly magnesiumNumber: number;
  readonly ferricShare: number;
  /** °C, olivine and liquid (Putirka 2008, equation 22), at the pressure and the melt's own water. */
  readonly temperature: number;
  /** H2O of the melt, wt %. */
  readonly water: number;
  /** Every step from the lava to the melt; F is the mass relative to the lava. */
  readonly path: ModelPath;
  readonly notes: readonly string[];
}

/**
 * Adds olivine in equilibrium to a lava until it could have come from mantle olivine: a primary-melt estimate.
 *
 * @param options `from` one analysis; `until` `{ Fo }` or `{ magnesiumNumber }`; `redox`; `pressure` bar; `water` wt %; `Kd`; `stepSize` and
 *   `most` in wt %; `analytes` with `meltType` (default `basalt`) and `coefficients`
 * @returns the melt, olivine added (wt % of the lava), Fo, Mg-number, Fe3+/ΣFe, temperature (°C), and the path
 * @throws RangeError naming the bad argument, or when the target is not reached with `most` olivine, or is already passed
 * @source Roeder & Emslie 1970 (exchange); Putirka et al. 2007, Putirka 2008 (temperature). Holds for lavas on the olivine-only part of
 *   their descent, commonly MgO above 8 wt %: below that it is flagged
 * @example primaryMelt({ from: suite.sample('KE-25'), until: { Fo: 90 }, redox: 0.2, pressure: 15000, water: 3 }).temperature
 */
export function primaryMelt(options: PrimaryMeltOptions): PrimaryMelt {
  const who = 'primaryMelt';
  if (typeof options !== 'object' || options === null) throw new TypeError(`${who}: give an object of options with from, until and redox.`);
  const { start, oxides, notes } = startMajors(options.from, who);
  const until = options.until as { Fo?: number; magnesiumNumber?: number } | undefined;
  if ((until?.Fo === undefined) === (until?.magnesiumNumber === undefined))
    throw new RangeError(`${who}: until must be { Fo } or { magnesiumNumber }.`);
  const target =
    readNumber(until!.Fo ?? until!.magnesiumNumber, who, until!.Fo === undefined ? 'until.magnesiumNumber' : 'until.Fo', {
      from: 0,
      to: 100,
      open: 'both',
    }) / 100;
  checkRedox(options.redox, who);
  const pressure = readNumber(options.pressure ?? 1e4, who, 'pressure', { from: 0, to: 1e5 });
  const water = readNumber(options.water ?? 0, who, 'water', { from: 0, to: 30 });
  const Kd = readNumber(options.Kd ?? thermometers().exchange.value, who, 'Kd', { from: 0, to: 1, open: 'both' });
  const stepSize = readNumber(options.stepSize ?? 0.1, who, 'stepSize', { from: 0, to: 5, open: 'from' }) / 100;
  const most = readNumber(options.most ?? 50, who, 'most', { from: 0, to: 400, open: 'from' }) / 100;
  const wanted = options.analytes ?? [];
  const elements = Array.isArray(wanted) && wanted.length === 0 ? [] : chooseElements(start, wanted, who, notes);
  const sets = readMeltTypes(options.meltType ?? 'basalt', who);
  const { analytes, used, missing } = gatherCoefficients(
    { minerals: ['olivine'], analytes: elements, sets, own: options.coefficients ?? {}, who },
    wanted === 'covered' ? 'covered' : 'all',
  );
  if (missing.length > 0) notes.push(`Not carried, because a coefficient is missing: ${missing.map(({ analyte }) => analyte).join(', ')}.`);
  if (oxides[place.MgO] < 8)
    notes.push(
      `The lava has ${oxides[place.MgO].toFixed(1)} wt % MgO: it has likely crystallised more than olivine, so the estimate leans on a ` +
        `part of the descent that olivine alone does not undo.`,
    );

  const { molar } = majorMasses();
  const ferrousAtStart = typeof options.redox === 'number' ? options.redox * oxides[place.FeOT] : NaN;
  const now = oxides.slice();
  let mass = 1;
  const waterAt = (): number => (100 * (water / (100 - water))) / (water / (100 - water) + mass);
  let ferric = NaN;
  const shareNow = (): number => {
    if (typeof options.redox === 'number') return ferrousAtStart / (mass * now[place.FeOT]);
    // Redox and temperature settle together, starting from the liquid's own thermometer.
    let temperature = liquidTemperature(now, waterAt());
    for (let round = 0; round < 4; round++) {
      ferric = ferricShareOf(now, options.redox, temperature, pressure);
      temperature = olivineLiquidTemperature(now, equilibriumOlivine(now, ferric, Kd), pressure, waterAt());
    }
    return ferricShareOf(now, options.redox, temperature, pressure);
  };
  const numberOf = (share: number): number => {
    const mg = now[place.MgO] / molar[place.MgO];
    return mg / (mg + ((1 - share) * now[place.FeOT]) / molar[place.FeOT]);
  };
  const olivine = new Float64Array(majors);
  const rows: { mass: number; oxides: Float64Array; Fo: number; number: number; ferric: number; water: number }[] = [];
  for (;;) {
    ferric = shareNow();
    const Fo = equilibriumOlivine(now, ferric, Kd);
    const number = numberOf(ferric);
    rows.push({ mass, oxides: now.slice(), Fo, number, ferric, water: waterAt() });
    const reached = (until!.Fo === undefined ? number : Fo) - target;
    if (reached >= 0) {
      if (rows.length === 1 && reached > 1e-9)
        throw new RangeError(
          `${who}: the lava is already past the target ` +
            `(${until!.Fo === undefined ? `Mg-number ${(100 * number).toFixed(1)}` : `equilibrium olivine Fo${(100 * Fo).toFixed(1)}`}).`,
        );
      break;
    }
    if (mass - 1 >= most)
      throw new RangeError(
        `${who}: the target is not reached with ${100 * most} wt % of olivine (equilibrium olivine Fo${(100 * Fo).toFixed(1)}); the lava ` +
          `is too evolved for olivine addition alone.`,
      );
    olivineOxides(Fo, olivine);
    for (let j = 0; j < majors; j++) now[j] = (now[j] + stepSize * olivine[j]) / (1 + stepSize);
    mass *= 1 + stepSize;
  }
  interpolateEnd(rows, target, until!.Fo === undefined ? 'number' : 'Fo');

  const F = Float64Array.from(rows, (row) => row.mass);
  const liquid = new Map<string, Float64Array>();
  majorOxides.forEach((oxide, j) =>
    liquid.set(
      oxide,
      Float64Array.from(rows, (row) => row.oxides[j]),
    ),
  );
  // Adding equilibrium crystals is Rayleigh crystallisation backwards.
  analytes.forEach((symbol, a) =>
    liquid.set(
      symbol,
      F.map((value) => amountOf(start, symbol) * value ** (used[0][a].value - 1)),
    ),
  );
  const end = rows[rows.length - 1];
  const temperatures = Float64Array.from(rows, (row) => olivineLiquidTemperature(row.oxides, row.Fo, pressure, row.water));
  const table = thermometers();
  const sources = [
    ...new Set([
      table.exchange.source,
      table.olivineLiquid.source,
      'putirka_2007',
      ...(typeof options.redox === 'number' ? [] : ['kress_carmichael_1991', 'frost_br_1991']),
    ]),
  ];
  const quantity = (of: (row: (typeof rows)[number]) => number, unit = '') => ({ unit, values: Float64Array.from(rows, of) });
  const path = buildPath({
    who,
    process: 'Olivine addition',
    F,
    meaning: 'mass relative to the lava',
    liquid,
    quantities: new Map([
      ['Fo', quantity((row) => 100 * row.Fo)],
      ['Mg-number', quantity((row) => 100 * row.number)],
      ['ferric share', quantity((row) => row.ferric)],
      ['water', quantity((row) => row.water, 'wt%')],
      ['temperature', { unit: '°C', values: temperatures }],
    ]),
    coefficients: used.flat(),
    notes,
    lineage: start.lineage,
    detail: { until: { ...until }, redox: options.redox as number, pressure, water, Kd, stepSize: 100 * stepSize },
    sources,
    tables: ['thermometers.json', 'iron-oxidation.json', 'atomic-weights.csv'],
  });
  const result = {
    melt: suiteOf({
      columns: [...path.liquid.columns.values()]
        .filter(({ symbol }) => symbol !== 'F')
        .map(({ symbol, unit, kind, values }) => derivedColumn(symbol, values.slice(-1), unit, undefined, kind)),
      labels: { sample: [`${start.samples[0]} primary melt`] },
      lineage: [...path.lineage, step('primaryMelt.melt', { olivineAdded: 100 * (end.mass - 1) })],
    }),
    olivineAdded: 100 * (end.mass - 1),
    Fo: 100 * end.Fo,
    magnesiumNumber: 100 * end.number,
    ferricShare: end.ferric,
    temperature: temperatures[rows.length - 1],
    water: end.water,
    path,
    notes,
    lineage: path.lineage,
  };
  return showAs(result, (it) => ({
    title:
      `Primary melt of ${start.samples[0]}: ${it.olivineAdded.toFixed(1)} wt % olivine added, ${it.temperature.toFixed(0)} °C at ` +
      `${(pressure / 1e4).toFixed(2)} GPa`,
    columns: ['', ...it.melt.analytes],
    rows: [
      ['lava', ...it.melt.analytes.map((symbol): TableCell => path.liquid.values(symbol)[0])],
      ['primary melt', ...it.melt.analytes.map((symbol): TableCell => it.melt.values(symbol)[0])],
    ],
    notes: [...it.notes, ...describeCoefficients(it.path.coefficients)],
  }));
}

/** Moves the last state back along its step to where the target is met. */
function interpolateEnd(
  rows: { mass: number; oxides: Float64Array; Fo: number; number: number; ferric: number; water: number }[],
  target: number,
  key: 'Fo' | 'number',
): void {
  if (rows.length < 2) return;
  const [before, after] = rows.slice(-2);
  const t = (target - before[key]) / (after[key] - before[key]);
  const between = (a: number, b: number) => a + t * (b - a);
  rows[rows.length - 1] = {
    mass: between(before.mass, after.mass),
    oxides: before.oxides.map((value, j) => between(value, after.oxides[j])),
    Fo: between(before.Fo, after.Fo),
    number: between(before.number, after.number),
    ferric: between(before.ferric, after.ferric),
    water: between(before.water, after.water),
  };
}
