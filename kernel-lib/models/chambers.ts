import { buildPath, evenly, type ModelPath } from './path';
import { inSituLiquid, refilledSteadyState, zoneRefinedLiquid } from './open-system-laws';
import { follow, readNumber, readSteps, setUpTrace, withConstantIsotopes, type TraceModelOptions } from './trace-setup';

/** What `crystalliseInSitu` takes. */
export interface InSituOptions extends TraceModelOptions {
  /** Fraction of liquid left in the chamber at the end (0–1). */
  readonly downTo: number;
  /** Fraction of the solidification zone's liquid that returns to the chamber (0–1). */
  readonly returned: number;
}

/**
 * In situ crystallisation: crystals grow in a solidification zone at the chamber's wall, and part of the zone's liquid returns.
 *
 * @param options as in `crystallise`, with `returned` (0 ≤ f < 1)
 * @returns the path of the chamber's liquid (steps + 1 rows, ppm)
 * @throws MissingCoefficientsError; RangeError naming the bad argument
 * @source Langmuir 1989
 * @example crystalliseInSitu({ from: { Ba: 200 }, assemblage: { bulk: 1 }, coefficients: { bulk: { Ba: 0.1 } }, downTo: 0.5, returned: 0.5 })
 */
export function crystalliseInSitu(options: InSituOptions): ModelPath {
  const who = 'crystalliseInSitu';
  const setup = setUpTrace(options, who);
  const downTo = readNumber(options.downTo, who, 'downTo', { from: 0, to: 1, open: 'both' });
  const returned = readNumber(options.returned, who, 'returned', { from: 0, to: 1, open: 'to' });
  const F = evenly(1, downTo, setup.steps);
  return buildPath({
    who,
    process: 'In situ crystallisation',
    F,
    meaning: 'liquid left',
    liquid: withConstantIsotopes(
      follow(setup, F, (D, left) => inSituLiquid(D, left, returned)),
      setup,
      F.length,
    ),
    coefficients: setup.used,
    notes: setup.notes,
    lineage: setup.start.lineage,
    detail: { ...setup.detail, downTo, returned },
    sources: ['langmuir_1989'],
  });
}

/** What `refineByZones` takes. */
export interface ZoneRefiningOptions extends TraceModelOptions {
  /** Volumes of rock that the molten zone has worked through at the end. */
  readonly volumes: number;
}

/**
 * Zone refining: a molten zone rises through rock of the composition `from`, melting ahead and crystallising behind.
 *
 * @param options as in `crystallise`; `from` is the rock, and the zone's first liquid; `volumes` n > 0
 * @returns the path of the zone's liquid (steps + 1 rows, ppm); F counts the volumes worked through
 * @throws MissingCoefficientsError; RangeError naming the bad argument
 * @source Harris 1957
 * @example refineByZones({ from: { Ba: 20 }, assemblage: { bulk: 1 }, coefficients: { bulk: { Ba: 0.1 } }, volumes: 5 })
 */
export function refineByZones(options: ZoneRefiningOptions): ModelPath {
  const who = 'refineByZones';
  const setup = setUpTrace(options, who);
  const volumes = readNumber(options.volumes, who, 'volumes', { from: 0, to: Infinity, open: 'from' });
  const F = evenly(0, volumes, setup.steps);
  const liquid = withConstantIsotopes(follow(setup, F, zoneRefinedLiquid), setup, F.length);
  return buildPath({
    who,
    process: 'Zone refining',
    F,
    meaning: 'volumes worked through',
    liquid,
    coefficients: setup.used,
    notes: setup.notes,
    lineage: setup.start.lineage,
    detail: { ...setup.detail, volumes },
    sources: ['harris_1957'],
  });
}

/** What `refillChamber` takes. */
export interface RefilledChamberOptions extends Omit<TraceModelOptions, 'steps'> {
  /** Part of the chamber that crystallises in each cycle. */
  readonly crystallised: number;
  /** Part of the chamber that erupts in each cycle; crystallised + erupted is refilled with `from`. */
  readonly erupted: number;
  /** How many cycles (default 40). */
  readonly cycles?: number;
}

/**
 * A chamber that is refilled with its parent, crystallises and is tapped, cycle after cycle: the lavas it erupts.
 *
 * @param options as in `crystallise`, with `crystallised` x and `erupted` y (x > 0, y ≥ 0, x + y < 1) and `cycles`
 * @returns the path of the erupted lava (cycles + 1 rows, ppm; row 0 is the parent); F counts the cycles, and the notes give the steady state
 * @throws MissingCoefficientsError; RangeError naming the bad argument
 * @source O'Hara 1977; O'Hara & Mathews 1981
 * @example refillChamber({ from: { Ba: 200 }, assemblage: { bulk: 1 }, coefficients: { bulk: { Ba: 0.1 } }, crystallised: 0.1, erupted: 0.1 })
 */
export function refillChamber(options: RefilledChamberOptions): ModelPath {
  const who = 'refillChamber';
  const setup = setUpTrace(options, who);
  const x = readNumber(options.crystallised, who, 'crystallised', { from: 0, to: 1, open: 'both' });
  const y = readNumber(options.erupted, who, 'erupted', { from: 0, to: 1 - x, open: 'to' });
  const cycles = readSteps(options.cycles, who, 40);
  const F = evenly(0, cycles, cycles);
  const liquid = new Map<string, Float64Array>();
  const steady: string[] = [];
  setup.analytes.forEach((symbol, a) => {
    const [start, D] = [setup.amounts[a], setup.bulk[a]];
    const enrichment = (1 - x) ** (D - 1);
    const values = new Float64Array(F.length);
    values[0] = start;
    let chamber = start;
    for (let cycle = 1; cycle <= cycles; cycle++) {
      values[cycle] = chamber * enrichment;
      chamber = (1 - x - y) * values[cycle] + (x + y) * start;
    }
    liquid.set(symbol, values);
    steady.push(`${symbol} ${Number((start * refilledSteadyState(D, x, y)).toPrecision(4))}`);
  });
  return buildPath({
    who,
    process: 'Refilled and tapped chamber',
    F,
    meaning: 'cycles',
    liquid: withConstantIsotopes(liquid, setup, F.length),
    coefficients: setup.used,
    notes: [...setup.notes, `Steady-state lava (ppm): ${steady.join(', ')}.`],
    lineage: setup.start.lineage,
    detail: { ...setup.detail, crystallised: x, erupted: y, cycles },
    sources: ['ohara_1977', 'ohara_mathews_1981'],
  });
}
