import { buildPath, evenly, type ModelPath } from './path';
import { isotopeElement } from './isotopes';
import { amountOf, joinLineage, oneAnalysis, type Composition } from './one-analysis';
import { chamberTime, openSystemLiquid } from './open-system-laws';
import { readNumber, setUpTrace, type TraceModelOptions } from './trace-setup';

/** What `assimilate` takes. */
export interface AssimilateOptions extends TraceModelOptions {
  /** The rock that is taken in: one analysis with every modelled element (ppm) and isotope ratio. */
  readonly assimilant: Composition;
  /** Mass assimilated for every unit of mass crystallised. */
  readonly r: number;
  /** Magma that comes in: its composition, and its mass for every unit crystallised. */
  readonly recharge?: { readonly with: Composition; readonly rate: number };
  /** The magma's mass at the end, relative to the start: below 1 where r + recharge < 1, above 1 where it is more. */
  readonly downTo?: number;
  /** Instead of downTo, and needed where r + recharge = 1: mass crystallised by the end, relative to the magma at the start. */
  readonly crystallised?: number;
}

function readEnd(options: AssimilateOptions, q: number, who: string): number {
  const { downTo, crystallised } = options;
  if ((downTo === undefined) === (crystallised === undefined)) throw new RangeError(`${who}: give either downTo or crystallised.`);
  if (crystallised !== undefined) {
    readNumber(crystallised, who, 'crystallised', { from: 0, to: Infinity, open: 'from' });
    if (1 + q * crystallised <= 0)
      throw new RangeError(`${who}: crystallised is ${crystallised}, but the magma is used up at ${Number((-1 / q).toPrecision(4))}.`);
    return crystallised;
  }
  if (Math.abs(q) < 1e-12)
    throw new RangeError(`${who}: with r + recharge = 1 the magma keeps its mass, so downTo says nothing; give crystallised instead.`);
  const end = readNumber(downTo, who, 'downTo', q < 0 ? { from: 0, to: 1, open: 'both' } : { from: 1, to: Infinity, open: 'from' });
  return (end - 1) / q;
}

/**
 * Assimilation with fractional crystallisation, with or without recharge, for trace elements and isotope ratios.
 *
 * @param options `from`, `assemblage`, `meltType`, `analytes`, `coefficients`, `steps` as in `crystallise`; `assimilant` one analysis; `r`
 *   assimilated/crystallised; `recharge` `{ with, rate }`; `downTo` mass of magma at the end relative to the start, or `crystallised` mass
 * @returns the path (steps + 1 rows): F is the magma's mass relative to the start, or the mass crystallised where that was asked for. The
 *   liquid has the quantities `crystallised` and `assimilated` (masses relative to the magma at the start)
 * @throws MissingCoefficientsError; RangeError naming what the assimilant or the recharge lacks
 * @source DePaolo 1981; DePaolo 1985. Rates and D stay constant; the assimilant is taken in whole
 * @example assimilate({ from: { Sr: 500, '87Sr/86Sr': 0.7035 }, assimilant: { Sr: 150, '87Sr/86Sr': 0.72 }, r: 0.2, downTo: 0.6,
 *   assemblage: { bulk: 1 }, coefficients: { bulk: { Sr: 1.5 } } })
 */
export function assimilate(options: AssimilateOptions): ModelPath {
  const who = 'assimilate';
  const setup = setUpTrace(options, who);
  const assimilant = oneAnalysis(options.assimilant, who, 'assimilant');
  const r = readNumber(options.r, who, 'r', { from: 0, to: Infinity });
  const recharge = options.recharge === undefined ? undefined : oneAnalysis(options.recharge.with, who, 'recharge.with');
  const p = options.recharge === undefined ? 0 : readNumber(options.recharge.rate, who, 'recharge.rate', { from: 0, to: Infinity });
  const lacking = [...setup.analytes, ...setup.isotopes].flatMap((symbol) => [
    ...(Number.isFinite(amountOf(assimilant, symbol)) ? [] : [`${symbol} of the assimilant`]),
    ...(recharge === undefined || Number.isFinite(amountOf(recharge, symbol)) ? [] : [`${symbol} of the recharge`]),
  ]);
  for (const symbol of setup.isotopes) {
    const element = isotopeElement(symbol)!;
    if (!setup.analytes.includes(element)) lacking.push(`${element} among the modelled analytes, to weigh ${symbol}`);
  }
  if (lacking.length > 0) throw new RangeError(`${who}: missing ${lacking.join(', ')}. Give them, or leave the analyte out of from or analytes.`);

  const q = r + p - 1;
  const end = readEnd(options, q, who);
  const crystallised = evenly(0, end, setup.steps);
  const mass = crystallised.map((x) => 1 + q * x);
  const size = crystallised.length;
  const times = crystallised.map((x) => chamberTime(x, q));
  const gainOf = (symbol: string, weigh: (analysis: typeof assimilant) => number) =>
    r * amountOf(assimilant, symbol) * weigh(assimilant) + (recharge === undefined ? 0 : p * amountOf(recharge, symbol) * weigh(recharge));
  const liquid = new Map<string, Float64Array>();
  const solid = new Map<string, Float64Array>();
  const cumulate = new Map<string, Float64Array>();
  setup.analytes.forEach((symbol, a) => {
    const [start, D, gain] = [setup.amounts[a], setup.bulk[a], gainOf(symbol, () => 1)];
    const values = times.map((time) => openSystemLiquid(start, gain, D, q, time));
    liquid.set(symbol, values);
    solid.set(
      symbol,
      values.map((value) => D * value),
    );
    // What the magma got, less what it still holds, is in the crystals.
    cumulate.set(
      symbol,
      values.map((value, i) => (crystallised[i] === 0 ? D * value : (start + gain * crystallised[i] - mass[i] * value) / crystallised[i])),
    );
  });
  for (const ratio of setup.isotopes) {
    const element = isotopeElement(ratio)!;
    const a = setup.analytes.indexOf(element);
    // The amount of the ratio's numerator behaves as the element does, so the ratio is a quotient of two concentrations.
    const startRatio = amountOf(setup.start, ratio);
    const gain = gainOf(element, (analysis) => amountOf(analysis, ratio));
    const carried = liquid.get(element)!;
    const values = new Float64Array(size);
    for (let i = 0; i < size; i++)
      values[i] = i === 0 ? startRatio : openSystemLiquid(setup.amounts[a] * startRatio, gain, setup.bulk[a], q, times[i]) / carried[i];
    liquid.set(ratio, values);
    solid.set(ratio, values);
  }
  const byMass = options.downTo !== undefined;
  return buildPath({
    who,
    process: recharge === undefined ? 'Assimilation with fractional crystallisation' : 'Assimilation, recharge and fractional crystallisation',
    F: byMass ? mass : crystallised,
    meaning: byMass ? 'magma, relative to the start' : 'mass crystallised, relative to the magma at the start',
    liquid,
    solid,
    cumulate,
    quantities: new Map([
      ['crystallised', { unit: '', values: crystallised }],
      ['assimilated', { unit: '', values: crystallised.map((x) => r * x) }],
    ]),
    coefficients: setup.used,
    notes: setup.notes,
    lineage: joinLineage(setup.start.lineage, assimilant.lineage, recharge?.lineage ?? []),
    detail: { ...setup.detail, r, rechargeRate: p, crystallised: end },
    sources: recharge === undefined ? ['depaolo_1981'] : ['depaolo_1981', 'depaolo_1985'],
  });
}
