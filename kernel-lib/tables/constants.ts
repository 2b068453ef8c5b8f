import { z } from 'zod';
import { field, once, readCsvTable } from './read';
import type { Standing } from './standing';

/** A published constant: decay constants, reference lines. */
export interface PublishedConstant {
  readonly constant: string;
  readonly name: string;
  readonly value: number;
  readonly unit: string;
  /** Source key, or '' where the source is not recorded. */
  readonly source: string;
  readonly standing: Standing;
}

const rowSchema = z.strictObject({ constant: field.text, name: field.text, value: field.number, unit: field.text, source: field.optionalText, standing: field.standing });

const all = once((): ReadonlyMap<string, PublishedConstant> => new Map(readCsvTable('constants.csv', rowSchema).map((row) => [row.constant, row])));

/**
 * A constant of reference-tables/constants.csv by its key, e.g. `lambda-147Sm`.
 *
 * @throws RangeError listing the keys there are
 */
export function publishedConstant(key: string): PublishedConstant {
  const found = all().get(key);
  if (found === undefined) throw new RangeError(`There is no constant "${key}". Known: ${[...all().keys()].join(', ')}.`);
  return found;
}
