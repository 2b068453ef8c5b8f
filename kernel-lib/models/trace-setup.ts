import { findAnalyte } from '../chemistry';
import type { Suite } from '../suite';
import type { MeltType } from '../tables';
import {
  bulkOf,
  gatherCoefficients,
  readAssemblage,
  readMeltTypes,
  type Assemblage,
  type OwnCoefficients,
  type UsedCoefficient,
} from './coefficients';
import { isotopeElement } from './isotopes';
import { amountOf, oneAnalysis, type Composition } from './one-analysis';

/** What every trace-element model of crystallisation takes. */
export interface TraceModelOptions {
  /** The liquid at the start: one analysis. */
  readonly from: Composition;
  /** Mass fractions of the crystallising minerals. `{ bulk: 1 }` with `coefficients: { bulk: { Sr: 1.2 } }` works with bulk D. */
  readonly assemblage: Assemblage;
  /** The set of coefficients, or an order of preference (default `basalt`). */
  readonly meltType?: MeltType | readonly MeltType[];
  /** `all` elements of the start (default; stops when a coefficient is missing), those `covered` by coefficients, or a list. */
  readonly analytes?: 'all' | 'covered' | readonly string[];
  /** Coefficients of your own, by mineral and element. */
  readonly coefficients?: OwnCoefficients;
  /** How many steps from start to end (default 60). */
  readonly steps?: number;
}

/** @internal The common ground of the trace-element models, checked. */
export interface TraceSetup {
  readonly start: Suite;
  readonly analytes: readonly string[];
  /** Concentration at the start, by analyte's place. */
  readonly amounts: Float64Array;
  readonly bulk: Float64Array;
  readonly used: readonly UsedCoefficient[];
  readonly isotopes: readonly string[];
  readonly steps: number;
  readonly notes: string[];
  readonly detail: {
    readonly assemblage: Readonly<Record<string, number>>;
    readonly meltType: readonly string[];
    readonly analytes: readonly string[];
  };
}

/** @internal A whole number of steps, or an error. */
export function readSteps(steps: number | undefined, who: string, usual = 60): number {
  const count = steps ?? usual;
  if (!Number.isInteger(count) || count < 1 || count > 100_000)
    throw new RangeError(`${who}: steps is ${String(steps)}; give a whole number from 1 to 100000.`);
  return count;
}

/** @internal A number within bounds, or an error that names it. */
export function readNumber(value: unknown, who: string, name: string, bounds: { from: number; to: number; open?: 'from' | 'to' | 'both' }): number {
  const { from, to, open } = bounds;
  const low = open === 'from' || open === 'both' ? (v: number) => v > from : (v: number) => v >= from;
  const high = open === 'to' || open === 'both' ? (v: number) => v < to : (v: number) => v <= to;
  if (typeof value !== 'number' || !Number.isFinite(value) || !low(value) || !high(value)) {
    const lower = `${open === 'from' || open === 'both' ? 'above' : 'from'} ${from}`;
    const upper = to === Infinity ? '' : ` ${open === 'to' || open === 'both' ? 'and below' : 'to'} ${to}`;
    throw new RangeError(`${who}: ${name} is ${String(value)}; give a number ${lower}${upper}.`);
  }
  return value;
}

/** @internal The elements to model: those asked for, or every element of the start; what cannot be modelled is noted or refused. */
export function chooseElements(start: Suite, wanted: 'all' | 'covered' | readonly string[], who: string, notes: string[]): readonly string[] {
  if (wanted === 'all' || wanted === 'covered') {
    const elements = start.analytes.filter((symbol) => findAnalyte(symbol)?.kind === 'element');
    const unusable = elements.filter((symbol) => !Number.isFinite(amountOf(start, symbol)));
    if (unusable.length > 0) notes.push(`Not modelled, because the start has no usable value: ${unusable.join(', ')}.`);
    const usable = elements.filter((symbol) => !unusable.includes(symbol));
    if (usable.length === 0)
      throw new RangeError(`${who}: from holds no element in ppm with a usable value. It holds: ${start.analytes.join(', ')}.`);
    return usable;
  }
  if (!Array.isArray(wanted)) throw new TypeError(`${who}: analytes must be "all", "covered" or a list of element symbols, not ${String(wanted)}.`);
  for (const symbol of wanted as readonly string[]) {
    if (findAnalyte(symbol)?.kind !== 'element')
      throw new RangeError(
        `${who}: analytes holds "${String(symbol)}", which is not an element symbol (such as Ba, or Ti for titanium given as TiO2).`,
      );
    if (!Number.isFinite(amountOf(start, symbol)))
      throw new RangeError(`${who}: from has no usable value of ${symbol}; leave it out of analytes, or give one.`);
  }
  return [...new Set(wanted as readonly string[])];
}

/** @internal Reads and checks everything that the trace-element models of crystallisation share. */
export function setUpTrace(options: TraceModelOptions, who: string): TraceSetup {
  if (typeof options !== 'object' || options === null) throw new TypeError(`${who}: give an object of options with from and assemblage.`);
  const start = oneAnalysis(options.from, who, 'from');
  const { minerals, shares } = readAssemblage(options.assemblage, who);
  const sets = readMeltTypes(options.meltType ?? 'basalt', who);
  const wanted = options.analytes ?? 'all';
  const notes: string[] = [];
  const elements = chooseElements(start, wanted, who, notes);
  const request = { minerals, analytes: elements, sets, own: options.coefficients ?? {}, who };
  const { analytes, used, missing } = gatherCoefficients(request, wanted === 'covered' ? 'covered' : 'all');
  if (missing.length > 0)
    notes.push(`Not modelled, because a coefficient is missing: ${[...new Set(missing.map(({ analyte }) => analyte))].join(', ')}.`);
  const isotopes = start.analytes.filter((symbol) => isotopeElement(symbol) !== undefined && Number.isFinite(amountOf(start, symbol)));
  return {
    start,
    analytes,
    isotopes,
    notes,
    amounts: Float64Array.from(analytes, (symbol) => amountOf(start, symbol)),
    bulk: bulkOf(shares, used),
    used: used.flat(),
    steps: readSteps(options.steps, who),
    detail: { assemblage: Object.fromEntries(minerals.map((mineral, m) => [mineral, shares[m]])), meltType: sets, analytes },
  };
}

/** @internal The same law for every analyte along F: amounts × law(bulk D, F). */
export function follow(setup: TraceSetup, F: Float64Array, law: (bulkD: number, F: number) => number): Map<string, Float64Array> {
  const columns = new Map<string, Float64Array>();
  setup.analytes.forEach((symbol, a) => {
    const values = new Float64Array(F.length);
    for (let i = 0; i < F.length; i++) values[i] = setup.amounts[a] * law(setup.bulk[a], F[i]);
    columns.set(symbol, values);
  });
  return columns;
}

/** @internal Adds the isotope ratios of the start, which closed-system crystallisation does not change. */
export function withConstantIsotopes(columns: Map<string, Float64Array>, setup: TraceSetup, size: number): Map<string, Float64Array> {
  for (const symbol of setup.isotopes) columns.set(symbol, new Float64Array(size).fill(amountOf(setup.start, symbol)));
  return columns;
}
