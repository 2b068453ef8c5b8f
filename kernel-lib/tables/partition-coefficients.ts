import { z } from 'zod';
import { field, once, readCsvTable } from './read';
import { standings, type Standing } from './standing';

/** The kind of melt that a set of coefficients was measured for. */
export type MeltType = 'basalt' | 'andesite' | 'dacite' | 'rhyolite' | 'mantle-melting';

export const meltTypes: readonly MeltType[] = ['basalt', 'andesite', 'dacite', 'rhyolite', 'mantle-melting'];

/** How sure the person who carried the number over was of it. */
export type Confidence = 'high' | 'medium' | 'low';

/** One published mineral–melt partition coefficient (mass fraction in the mineral over mass fraction in the melt; no unit). */
export interface PartitionCoefficient {
  readonly mineral: string;
  readonly melt: MeltType;
  /** Element symbol. */
  readonly analyte: string;
  /** Undefined where the source gives a range only. */
  readonly value: number | undefined;
  readonly minimum: number | undefined;
  readonly maximum: number | undefined;
  readonly source: string;
  readonly standing: Standing;
  readonly confidence: Confidence;
  readonly note: string;
}

const confidences = ['high', 'medium', 'low'] as const;

const rowSchema = z
  .strictObject({
    mineral: field.text,
    melt: z.enum(['basalt', 'andesite', 'dacite', 'rhyolite', 'mantle-melting']),
    analyte: field.text,
    value: field.optionalNumber,
    minimum: field.optionalNumber,
    maximum: field.optionalNumber,
    source: field.text,
    standing: field.standing,
    confidence: z.enum(confidences),
    note: field.optionalText,
  })
  .refine((row) => row.value !== undefined || (row.minimum !== undefined && row.maximum !== undefined), 'needs a value, or a minimum and a maximum');

const all = once((): readonly PartitionCoefficient[] => readCsvTable('partition-coefficients.csv', rowSchema));

const keyOf = (mineral: string, melt: string, analyte: string): string => `${mineral}\n${melt}\n${analyte}`;

const byKey = once((): ReadonlyMap<string, readonly PartitionCoefficient[]> => {
  const rank = ({ value, standing, confidence }: PartitionCoefficient) =>
    (value === undefined ? 100 : 0) + 10 * standings.indexOf(standing) + confidences.indexOf(confidence);
  const groups = new Map<string, PartitionCoefficient[]>();
  for (const row of all()) {
    const key = keyOf(row.mineral, row.melt, row.analyte);
    const group = groups.get(key);
    if (group === undefined) groups.set(key, [row]);
    else group.push(row);
  }
  // Array sorting is stable, so rows of equal rank keep the order of the table.
  for (const group of groups.values()) group.sort((a, b) => rank(a) - rank(b));
  return groups;
});

/** Every coefficient of reference-tables/partition-coefficients.csv, in the table's order. */
export function partitionCoefficients(): readonly PartitionCoefficient[] {
  return all();
}

/**
 * The published coefficients of one element between one mineral and one kind of melt, the preferred one first: single values before
 * ranges, then by standing (verified before from memory), then by confidence, then in the table's order, where measured sets stand before
 * compilations.
 *
 * @returns an empty list when there is none
 * @example coefficientsFor('plagioclase', 'basalt', 'Sr')[0].value
 */
export function coefficientsFor(mineral: string, melt: MeltType, analyte: string): readonly PartitionCoefficient[] {
  return byKey().get(keyOf(mineral, melt, analyte)) ?? [];
}

/** The least and the greatest published coefficient of one element between one mineral and one kind of melt; undefined when there is none. */
export function coefficientRange(
  mineral: string,
  melt: MeltType,
  analyte: string,
): { readonly low: number; readonly high: number; readonly sources: readonly string[] } | undefined {
  const rows = coefficientsFor(mineral, melt, analyte);
  if (rows.length === 0) return undefined;
  const numbers = rows.flatMap(({ value, minimum, maximum }) => [value, minimum, maximum]).filter((number) => number !== undefined);
  return { low: Math.min(...numbers), high: Math.max(...numbers), sources: [...new Set(rows.map(({ source }) => source))] };
}

/** The minerals that have coefficients, in order of first appearance. */
export function partitionMinerals(): readonly string[] {
  return [...new Set(all().map(({ mineral }) => mineral))];
}
