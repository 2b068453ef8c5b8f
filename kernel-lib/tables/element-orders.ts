import { z } from 'zod';
import { field, once, readCsvTable } from './read';

const rowSchema = z.strictObject({ order: field.text, position: field.number, element: field.text, source: field.text, standing: field.standing });

/** An order in which elements stand along the axis of a pattern. */
export interface ElementOrder {
  readonly key: string;
  readonly elements: readonly string[];
  readonly sources: readonly string[];
}

const all = once((): ReadonlyMap<string, ElementOrder> => {
  const orders = new Map<string, { key: string; elements: string[]; sources: string[] }>();
  for (const row of readCsvTable('element-orders.csv', rowSchema)) {
    let entry = orders.get(row.order);
    if (entry === undefined) orders.set(row.order, (entry = { key: row.order, elements: [], sources: [] }));
    entry.elements[row.position - 1] = row.element;
    if (!entry.sources.includes(row.source)) entry.sources.push(row.source);
  }
  return orders;
});

/** Every element order of reference-tables/element-orders.csv, by key. */
export function elementOrders(): ReadonlyMap<string, ElementOrder> {
  return all();
}

/**
 * An element order by its key: `rare-earths`, `mantle-incompatibility-1989`.
 *
 * @throws RangeError listing the keys there are
 */
export function elementOrder(key: string): ElementOrder {
  const found = all().get(key);
  if (found === undefined) throw new RangeError(`There is no element order "${key}". Known: ${[...all().keys()].join(', ')}.`);
  return found;
}
