import { z } from 'zod';
import type { Confidence } from './partition-coefficients';
import { field, once, readCsvTable } from './read';
import type { Standing } from './standing';

/** Mass fractions of the minerals of a mantle rock, or their shares in a melting reaction (positive: consumed, negative: made). */
export interface MantleMode {
  readonly kind: 'mode' | 'melting reaction';
  readonly condition: string;
  /** Mass fraction by mineral. */
  readonly minerals: ReadonlyMap<string, number>;
  readonly source: string;
  readonly standing: Standing;
  readonly confidence: Confidence;
  readonly note: string;
}

const mineralNames = ['olivine', 'orthopyroxene', 'clinopyroxene', 'garnet', 'spinel', 'plagioclase'] as const;

const rowSchema = z.strictObject({
  kind: z.enum(['mode', 'melting reaction']),
  condition: field.text,
  olivine: field.optionalNumber,
  orthopyroxene: field.optionalNumber,
  clinopyroxene: field.optionalNumber,
  garnet: field.optionalNumber,
  spinel: field.optionalNumber,
  plagioclase: field.optionalNumber,
  source: field.text,
  standing: field.standing,
  confidence: z.enum(['high', 'medium', 'low']),
  note: field.optionalText,
});

const all = once((): readonly MantleMode[] =>
  readCsvTable('mantle-modes.csv', rowSchema).map((row) => {
    const minerals = new Map<string, number>();
    for (const mineral of mineralNames) if (row[mineral] !== undefined) minerals.set(mineral, row[mineral]);
    return {
      kind: row.kind,
      condition: row.condition,
      minerals,
      source: row.source,
      standing: row.standing,
      confidence: row.confidence,
      note: row.note,
    };
  }),
);

/** Every mode and melting reaction of reference-tables/mantle-modes.csv. */
export function mantleModes(): readonly MantleMode[] {
  return all();
}

/**
 * A mode or melting reaction by kind, source key and (a part of) its condition.
 *
 * @throws RangeError when none or more than one fits, listing what there is
 * @example mantleMode('mode', 'mckenzie_onions_1991', 'spinel').minerals.get('olivine') // 0.578
 */
export function mantleMode(kind: 'mode' | 'melting reaction', source: string, condition = ''): MantleMode {
  const found = all().filter((entry) => entry.kind === kind && entry.source === source && entry.condition.includes(condition));
  if (found.length === 1) return found[0];
  const known = all()
    .filter((entry) => entry.kind === kind)
    .map((entry) => `${entry.source} (${entry.condition})`);
  throw new RangeError(
    `${found.length === 0 ? 'No' : 'More than one'} ${kind} fits source "${source}", condition "${condition}". There are: ${known.join('; ')}.`,
  );
}
