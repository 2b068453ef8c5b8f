import { findAnalyte } from '../chemistry';
import type { Suite } from '../suite';
import { column, step, suiteOf } from '../suite';
import { reservoir, type MantleMode, type MeltType } from '../tables';
import { gatherCoefficients, readAssemblage, readMeltTypes, type Assemblage, type OwnCoefficients, type UsedCoefficient } from './coefficients';
import { isotopeElement } from './isotopes';
import { meltByExtraction, meltInBatch, meltingStages, type MeltingStage } from './melting-stages';
import { amountOf, oneAnalysis, type Composition } from './one-analysis';
import { buildPath, evenly, type ModelPath } from './path';
import { chooseElements, readNumber, readSteps } from './trace-setup';

/** One facies of a melting rock: its minerals, and how they melt. */
export interface MeltingFacies {
  /** Mass fractions of the minerals, or a mode of the tables: `mantleMode('mode', …)`. */
  readonly mode: Assemblage | MantleMode;
  /** Proportions in which they go into the melt (negative: made by the reaction), or a reaction of the tables; default: as in the mode. */
  readonly reaction?: Readonly<Record<string, number>> | MantleMode;
  /** Share of the pooled melt that comes from this facies, where there is more than one. */
  readonly share?: number;
}

/** What `melt` takes. */
export interface MeltOptions extends Partial<MeltingFacies> {
  /** The rock that melts: one analysis in ppm, or the key of a reservoir of the tables. */
  readonly source: Composition | string;
  /** More than one facies melting side by side, e.g. garnet and spinel peridotite; instead of mode and reaction. */
  readonly facies?: readonly MeltingFacies[];
  /** `batch` (default), `fractional` (each melt as it leaves), `pooled` (fractional melts aggregated), `dynamic` (with melt retained). */
  readonly process?: 'batch' | 'fractional' | 'pooled' | 'dynamic';
  /** Melt retained in the rock in dynamic or pooled melting: mass fraction of solid and melt together. */
  readonly retained?: number;
  /** Last melt fraction (0–1). */
  readonly upTo: number;
  /** First melt fraction (default upTo/steps). */
  readonly startAt?: number;
  readonly meltType?: MeltType | readonly MeltType[];
  readonly analytes?: 'all' | 'covered' | readonly string[];
  readonly coefficients?: OwnCoefficients;
  readonly steps?: number;
}

interface ReadFacies {
  readonly minerals: readonly string[];
  readonly stages: readonly MeltingStage[];
  readonly share: number;
  readonly sources: readonly string[];
  readonly tables: readonly string[];
  readonly detail: { readonly mode: Readonly<Record<string, number>>; readonly reaction: Readonly<Record<string, number>>; readonly share: number };
  readonly exhausted: readonly string[];
}

const isTableMode = (value: unknown): value is MantleMode =>
  typeof value === 'object' && value !== null && (value as Partial<MantleMode>).minerals instanceof Map;

function readFacies(facies: MeltingFacies, upTo: number, who: string, name: string): ReadFacies {
  if (typeof facies?.mode !== 'object' || facies.mode === null)
    throw new TypeError(`${who}: ${name} needs a mode: mass fractions by mineral, or mantleMode('mode', …).`);
  const sources: string[] = [];
  const plain = (
    value: Readonly<Record<string, number>> | MantleMode,
    kind: MantleMode['kind'],
    argument: string,
  ): Readonly<Record<string, number>> => {
    if (!isTableMode(value)) return value as Readonly<Record<string, number>>;
    if (value.kind !== kind) throw new RangeError(`${who}: ${argument} is a ${value.kind} of the tables; it must be a ${kind}.`);
    sources.push(value.source);
    return Object.fromEntries(value.minerals);
  };
  const { minerals, shares } = readAssemblage(plain(facies.mode, 'mode', `${name}.mode`), who, `${name}.mode`);
  const given = facies.reaction === undefined ? undefined : plain(facies.reaction, 'melting reaction', `${name}.reaction`);
  const names = [...minerals, ...Object.keys(given ?? {}).filter((mineral) => !minerals.includes(mineral))];
  const masses = Float64Array.from(names, (_, m) => shares[m] ?? 0);
  const reaction = given === undefined ? masses.slice() : Float64Array.from(names, (mineral) => given[mineral] ?? 0);
  const sum = reaction.reduce((total, each) => total + each, 0);
  if (!(Math.abs(sum - 1) <= 0.05))
    throw new RangeError(`${who}: ${name}.reaction sums to ${Number(sum.toPrecision(4))}; what melts less what is made must sum to 1.`);
  names.forEach((mineral, m) => {
    if (masses[m] === 0 && reaction[m] > 0) throw new RangeError(`${who}: ${name}.reaction consumes ${mineral}, which the mode does not hold.`);
  });
  const stages = meltingStages(
    masses,
    reaction.map((each) => each / sum),
    upTo,
  );
  const exhausted = stages.slice(0, -1).map(({ to, masses: at, reaction: shared, from }) => {
    const out = names.filter((_, m) => at[m] > 0 && at[m] - shared[m] * (to - from) <= 1e-9);
    return `${out.join(' and ')} at F = ${Number(to.toPrecision(4))}`;
  });
  return {
    minerals: names,
    stages,
    share: facies.share ?? 1,
    sources,
    tables: sources.length > 0 ? ['mantle-modes.csv'] : [],
    exhausted,
    detail: {
      mode: Object.fromEntries(names.map((mineral, m) => [mineral, masses[m]])),
      reaction: Object.fromEntries(names.map((mineral, m) => [mineral, reaction[m] / sum])),
      share: facies.share ?? 1,
    },
  };
}

function readSource(source: Composition | string, who: string): Suite {
  if (typeof source !== 'string') return oneAnalysis(source, who, 'source');
  const { values, key } = reservoir(source);
  const columns = [...values.values()]
    .filter(({ analyte }) => findAnalyte(analyte) !== undefined)
    .map(({ analyte, value }) => column({ symbol: analyte, values: [value] }));
  return suiteOf({
    columns,
    labels: { sample: [key] },
    lineage: [
      step('reservoir', { reservoir: key }, { sources: [...new Set([...values.values()].map((each) => each.source))], tables: ['reservoirs.csv'] }),
    ],
  });
}

/**
 * Trace elements of the melts of a rock: batch, fractional, pooled or dynamic melting, modal or not, in one facies or several. A mineral
 * that runs out is left behind and the others go on; where it does is in the notes.
 *
 * @param options `source` one analysis (ppm) or a reservoir's key; `mode` and `reaction`, or `facies` with shares; `process` `batch` |
 *   `fractional` | `pooled` | `dynamic` (with `retained`); `upTo` last melt fraction; `meltType` (default `mantle-melting`); `analytes`,
 *   `coefficients`, `steps` (default 40)
 * @returns the path (steps + 1 rows, ppm): F is the melt fraction; `liquid` the melt, `solid` the residue (all facies together)
 * @throws MissingCoefficientsError; RangeError naming the bad argument
 * @source Shaw 1970; Zou 1998 (dynamic); McKenzie 1985 (retained melt). D of each mineral stays constant
 * @example melt({ source: 'primitive-mantle-1989', mode: { olivine: 0.6, orthopyroxene: 0.25, clinopyroxene: 0.15 }, upTo: 0.2, analytes: ['La',
 *   'Yb'] })
 */
export function melt(options: MeltOptions): ModelPath {
  const who = 'melt';
  if (typeof options !== 'object' || options === null) throw new TypeError(`${who}: give an object of options with source, mode and upTo.`);
  const process = options.process ?? 'batch';
  if (!['batch', 'fractional', 'pooled', 'dynamic'].includes(process))
    throw new RangeError(`${who}: process must be "batch", "fractional", "pooled" or "dynamic", not "${String(process)}".`);
  const upTo = readNumber(options.upTo, who, 'upTo', { from: 0, to: 1, open: 'both' });
  const steps = readSteps(options.steps, who, 40);
  const startAt = options.startAt === undefined ? upTo / (steps + 1) : readNumber(options.startAt, who, 'startAt', { from: 0, to: upTo, open: 'to' });
  if (process === 'dynamic' && options.retained === undefined)
    throw new RangeError(`${who}: dynamic melting needs retained, the mass fraction of melt held in the rock.`);
  if (process !== 'dynamic' && process !== 'pooled' && options.retained !== undefined)
    throw new RangeError(`${who}: retained belongs to process "dynamic" or "pooled".`);
  const retained = options.retained === undefined ? 0 : readNumber(options.retained, who, 'retained', { from: 0, to: 1, open: 'to' });
  if ((options.facies === undefined) === (options.mode === undefined)) throw new RangeError(`${who}: give either mode (with reaction) or facies.`);
  const facies =
    options.facies === undefined
      ? [readFacies({ mode: options.mode!, reaction: options.reaction }, upTo, who, 'mode')]
      : options.facies.map((each, i) => readFacies(each, upTo, who, `facies[${i}]`));
  const shareSum = facies.reduce((sum, each) => sum + readNumber(each.share, who, 'share', { from: 0, to: Infinity }), 0);
  if (!(shareSum > 0)) throw new RangeError(`${who}: the shares of the facies sum to ${shareSum}.`);

  const source = readSource(options.source, who);
  const notes: string[] = facies.flatMap(({ exhausted }, i) =>
    exhausted.map((text) => `Used up${facies.length > 1 ? ` in facies ${i + 1}` : ''}: ${text}.`),
  );
  const wanted = options.analytes ?? 'all';
  const elements = chooseElements(source, wanted, who, notes);
  const sets = readMeltTypes(options.meltType ?? 'mantle-melting', who);
  const minerals = [...new Set(facies.flatMap((each) => each.minerals))];
  const { analytes, used, missing } = gatherCoefficients(
    { minerals, analytes: elements, sets, own: options.coefficients ?? {}, who },
    wanted === 'covered' ? 'covered' : 'all',
  );
  if (missing.length > 0)
    notes.push(`Not modelled, because a coefficient is missing: ${[...new Set(missing.map(({ analyte }) => analyte))].join(', ')}.`);

  const F = evenly(startAt, upTo, steps);
  const liquid = new Map<string, Float64Array>();
  const residue = new Map<string, Float64Array>();
  analytes.forEach((symbol, a) => {
    const start = amountOf(source, symbol);
    const melts = new Float64Array(F.length);
    const solids = new Float64Array(F.length);
    for (const { minerals: names, stages, share } of facies) {
      const K = names.map((mineral) => used[minerals.indexOf(mineral)][a].value);
      const results = process === 'batch' ? meltInBatch(stages, K, F) : meltByExtraction(stages, K, retained, F);
      results.forEach((result, i) => {
        melts[i] += (share / shareSum) * start * (process === 'pooled' ? result.pooled : result.liquid);
        solids[i] += (share / shareSum) * start * result.residue;
      });
    }
    liquid.set(symbol, melts);
    residue.set(symbol, solids);
  });
  for (const ratio of source.analytes.filter((symbol) => isotopeElement(symbol) !== undefined && Number.isFinite(amountOf(source, symbol)))) {
    liquid.set(ratio, new Float64Array(F.length).fill(amountOf(source, ratio)));
  }
  const titles = {
    batch: 'Batch melting',
    fractional: 'Fractional melting',
    pooled: 'Pooled fractional melting',
    dynamic: 'Dynamic melting',
  } as const;
  return buildPath({
    who,
    process: titles[process],
    F,
    meaning: 'melt fraction',
    liquid,
    solid: residue,
    coefficients: used.flat() as readonly UsedCoefficient[],
    notes,
    lineage: source.lineage,
    detail: { process, upTo, startAt, retained, facies: facies.map(({ detail }) => detail), meltType: sets, analytes },
    sources: ['shaw_1970', ...(retained > 0 ? ['zou_1998', 'mckenzie_1985'] : []), ...facies.flatMap((each) => each.sources)],
    tables: facies.flatMap((each) => each.tables),
  });
}
