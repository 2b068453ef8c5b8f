import { z } from 'zod';
import { findAnalyte } from '../chemistry';
import { field, once, readCsvTable } from './read';
import type { Standing } from './standing';

/** One published value of a reservoir. Unit: `wt%`, `ppm`, or `ratio` (bare number). */
export interface ReservoirValue {
  readonly analyte: string;
  readonly value: number;
  readonly unit: 'wt%' | 'ppm' | 'ratio';
  readonly source: string;
  readonly standing: Standing;
}

/** A reference composition: chondrite, mantle, MORB, sediment, crust, isotope reservoir. */
export interface Reservoir {
  readonly key: string;
  readonly name: string;
  readonly values: ReadonlyMap<string, ReservoirValue>;
}

const rowSchema = z.strictObject({
  reservoir: field.text, name: field.text, analyte: field.text, value: field.number, unit: z.enum(['wt%', 'ppm', 'ratio']), source: field.text,
  standing: field.standing, confidence: field.optionalText,
});

const all = once((): ReadonlyMap<string, Reservoir> => {
  const reservoirs = new Map<string, Reservoir & { values: Map<string, ReservoirValue> }>();
  for (const { reservoir: key, name, analyte, value, unit, source, standing } of readCsvTable('reservoirs.csv', rowSchema)) {
    let entry = reservoirs.get(key);
    if (entry === undefined) reservoirs.set(key, (entry = { key, name, values: new Map() }));
    entry.values.set(analyte, { analyte, value, unit, source, standing });
  }
  return reservoirs;
});

/** Every reservoir of reference-tables/reservoirs.csv, by key. */
export function reservoirs(): ReadonlyMap<string, Reservoir> {
  return all();
}

/**
 * A reservoir by its key, e.g. `primitive-mantle-1989`, `chondrite-c1-1989`, `n-morb-1989`.
 *
 * @throws RangeError listing the keys there are
 */
export function reservoir(key: string): Reservoir {
  const found = all().get(key);
  if (found === undefined) throw new RangeError(`There is no reservoir "${key}". Known: ${[...all().keys()].join(', ')}.`);
  return found;
}

/** The unit in which the library keeps an analyte ('' for a bare number); unknown ones keep the table's unit. */
export function reservoirUnit(value: ReservoirValue): string {
  return findAnalyte(value.analyte)?.unit ?? (value.unit === 'ratio' ? '' : value.unit);
}
