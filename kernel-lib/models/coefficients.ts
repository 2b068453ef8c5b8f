import { coefficientRange, coefficientsFor, meltTypes, partitionMinerals, type MeltType, type Standing } from '../tables';

/** A coefficient of the user's own: a number, or a number with where it comes from. */
export type OwnCoefficient = number | { readonly value: number; readonly source?: string };

/** Coefficients of the user's own, by mineral and element; they win over the tables. */
export type OwnCoefficients = Readonly<Record<string, Readonly<Record<string, OwnCoefficient>>>>;

/** Mass fractions (or any proportions) of minerals, by name. */
export type Assemblage = Readonly<Record<string, number>>;

/** One coefficient as a model used it. */
export interface UsedCoefficient {
  readonly mineral: string;
  readonly analyte: string;
  readonly meltType: MeltType | 'supplied';
  readonly value: number;
  /** Least and greatest published value for this mineral, element and melt type; the value itself where it was supplied. */
  readonly low: number;
  readonly high: number;
  /** Source key, or what the user wrote. */
  readonly source: string;
  readonly standing: Standing | 'supplied';
}

/** A coefficient that a model needs and does not have. */
export interface MissingCoefficient {
  readonly mineral: string;
  readonly analyte: string;
  readonly meltTypes: readonly MeltType[];
  /** What the tables do hold: a range without a single value, or other melt types. */
  readonly hint: string;
}

/** Stops a model that lacks coefficients. `missing` lists them; `covered` the analytes that have all they need. */
export class MissingCoefficientsError extends Error {
  override readonly name = 'MissingCoefficientsError';
  constructor(
    who: string,
    readonly missing: readonly MissingCoefficient[],
    readonly covered: readonly string[],
  ) {
    const byMineral = new Map<string, string[]>();
    for (const { mineral, analyte, hint } of missing) {
      const list = byMineral.get(mineral) ?? [];
      list.push(hint === '' ? analyte : `${analyte} (${hint})`);
      byMineral.set(mineral, list);
    }
    const sets = [...new Set(missing.flatMap((each) => each.meltTypes))].join(', ');
    super(
      `${who}: no partition coefficient (${sets} melt) for ` +
        `${[...byMineral].map(([mineral, list]) => `${mineral}: ${list.join(', ')}`).join('; ')}. ` +
        `Supply them in options.coefficients, e.g. { ${missing[0].mineral}: { ${missing[0].analyte}: … } }; or add them to ` +
        'reference-tables/partition-coefficients.csv with their source; or name another set in meltType, such as ["andesite", "basalt"]; ' +
        'or restrict ' +
        `analytes to what is covered: ${covered.length === 0 ? 'none' : covered.join(', ')}.`,
    );
  }
}

/** @internal Checks an assemblage and scales it to a sum of one. */
export function readAssemblage(
  assemblage: Assemblage,
  who: string,
  argument = 'assemblage',
): { readonly minerals: readonly string[]; readonly shares: Float64Array } {
  if (typeof assemblage !== 'object' || assemblage === null)
    throw new TypeError(`${who}: ${argument} must be an object of shares by mineral, such as { olivine: 0.2, plagioclase: 0.8 }.`);
  const entries = Object.entries(assemblage);
  for (const [mineral, share] of entries) {
    if (typeof share !== 'number' || !Number.isFinite(share) || share < 0)
      throw new RangeError(`${who}: ${argument}.${mineral} is ${String(share)}; give a share of zero or more.`);
  }
  const sum = entries.reduce((total, [, share]) => total + share, 0);
  if (!(sum > 0)) throw new RangeError(`${who}: the shares of ${argument} sum to ${sum}; give at least one mineral a positive share.`);
  // A sum near 1 or 100 is a rounded one; anything else is more likely a slip of the pen.
  if (Math.abs(sum - 1) > 0.02 && Math.abs(sum - 100) > 2) {
    throw new RangeError(`${who}: the shares of ${argument} sum to ${Number(sum.toPrecision(6))}; they must sum to 1 (or to 100).`);
  }
  const used = entries.filter(([, share]) => share > 0);
  return { minerals: used.map(([mineral]) => mineral), shares: Float64Array.from(used, ([, share]) => share / sum) };
}

/** @internal Checks a choice of melt type: one, or an order of preference. */
export function readMeltTypes(meltType: MeltType | readonly MeltType[], who: string): readonly MeltType[] {
  const list = [meltType].flat() as MeltType[];
  for (const each of list) {
    if (!meltTypes.includes(each))
      throw new RangeError(
        `${who}: meltType "${String(each)}" is not known; choose from ${meltTypes.map((type) => `"${type}"`).join(', ')}, or an order of preference.`,
      );
  }
  if (list.length === 0) throw new RangeError(`${who}: meltType is an empty list.`);
  return list;
}

/** @internal Checks coefficients of the user's own. */
export function checkOwnCoefficients(own: OwnCoefficients, who: string): void {
  for (const [mineral, elements] of Object.entries(own)) {
    if (typeof elements !== 'object' || elements === null)
      throw new TypeError(`${who}: coefficients.${mineral} must be an object of numbers by element.`);
    for (const [analyte, given] of Object.entries(elements)) {
      const value = typeof given === 'number' ? given : given?.value;
      if (typeof value !== 'number' || !Number.isFinite(value) || value < 0)
        throw new RangeError(`${who}: coefficients.${mineral}.${analyte} is ${String(value)}; give a number of zero or more.`);
    }
  }
}

/** @internal The coefficient of one element in one mineral: the user's own, else the first melt type in the order that has a single value. */
export function findCoefficient(mineral: string, analyte: string, sets: readonly MeltType[], own: OwnCoefficients): UsedCoefficient | undefined {
  const given = Object.hasOwn(own, mineral) && Object.hasOwn(own[mineral], analyte) ? own[mineral][analyte] : undefined;
  if (given !== undefined) {
    const value = typeof given === 'number' ? given : given.value;
    const source = typeof given === 'number' ? 'supplied by the user' : (given.source ?? 'supplied by the user');
    return { mineral, analyte, meltType: 'supplied', value, low: value, high: value, source, standing: 'supplied' };
  }
  for (const meltType of sets) {
    const row = coefficientsFor(mineral, meltType, analyte)[0];
    if (row?.value === undefined) continue;
    const { low, high } = coefficientRange(mineral, meltType, analyte)!;
    return { mineral, analyte, meltType, value: row.value, low, high, source: row.source, standing: row.standing };
  }
  return undefined;
}

function describeMissing(mineral: string, analyte: string, sets: readonly MeltType[]): MissingCoefficient {
  const range = sets.flatMap((set) => coefficientRange(mineral, set, analyte) ?? [])[0];
  const others = meltTypes.filter((type) => !sets.includes(type) && coefficientsFor(mineral, type, analyte)[0]?.value !== undefined);
  const hint = range !== undefined ? `published as a range, ${range.low}–${range.high}` : others.length > 0 ? `there for ${others.join(', ')}` : '';
  return { mineral, analyte, meltTypes: sets, hint };
}

/**
 * @internal Every coefficient that a model needs, or an error that lists all that are missing.
 *
 * @param allOrCovered `all` stops at a missing one; `covered` leaves the analyte out and reports it
 * @returns `used[m][a]` for mineral m and analyte a
 */
export function gatherCoefficients(
  request: {
    readonly minerals: readonly string[];
    readonly analytes: readonly string[];
    readonly sets: readonly MeltType[];
    readonly own: OwnCoefficients;
    readonly who: string;
  },
  allOrCovered: 'all' | 'covered' = 'all',
): { readonly analytes: readonly string[]; readonly used: readonly (readonly UsedCoefficient[])[]; readonly missing: readonly MissingCoefficient[] } {
  const { minerals, analytes, sets, own, who } = request;
  checkOwnCoefficients(own, who);
  const known = partitionMinerals();
  for (const mineral of minerals) {
    if (!known.includes(mineral) && !Object.hasOwn(own, mineral)) {
      throw new RangeError(
        `${who}: there are no coefficients for "${mineral}". The tables hold: ${known.join(', ')}; supply others in options.coefficients.`,
      );
    }
  }
  const found = minerals.map((mineral) => analytes.map((analyte) => findCoefficient(mineral, analyte, sets, own)));
  const missing = minerals.flatMap((mineral, m) =>
    analytes.flatMap((analyte, a) => (found[m][a] === undefined ? [describeMissing(mineral, analyte, sets)] : [])),
  );
  const covered = analytes.filter((_, a) => found.every((row) => row[a] !== undefined));
  if (missing.length > 0 && (allOrCovered === 'all' || covered.length === 0)) throw new MissingCoefficientsError(who, missing, covered);
  const kept = analytes.flatMap((_, a) => (found.every((row) => row[a] !== undefined) ? [a] : []));
  return { analytes: covered, used: found.map((row) => kept.map((a) => row[a]!)), missing };
}

/** @internal Bulk coefficients: Σ share × coefficient, one an analyte. */
export function bulkOf(
  shares: ArrayLike<number>,
  used: readonly (readonly UsedCoefficient[])[],
  pick: 'value' | 'low' | 'high' = 'value',
): Float64Array {
  const bulk = new Float64Array(used[0]?.length ?? 0);
  for (let m = 0; m < used.length; m++) for (let a = 0; a < bulk.length; a++) bulk[a] += shares[m] * used[m][a][pick];
  return bulk;
}

/** @internal The source keys among coefficients, without what users supplied. */
export function sourcesOf(used: Iterable<UsedCoefficient>): readonly string[] {
  const keys = new Set<string>();
  for (const { source, standing } of used) if (standing !== 'supplied') keys.add(source);
  return [...keys];
}

/** @internal Coefficients as a step of the lineage records them: mineral, element, melt type, value, range, source, standing. */
export function recordCoefficients(used: Iterable<UsedCoefficient>): readonly (readonly (string | number)[])[] {
  return Array.from(used, ({ mineral, analyte, meltType, value, low, high, source, standing }) => [
    mineral,
    analyte,
    meltType,
    value,
    low,
    high,
    source,
    standing,
  ]);
}
