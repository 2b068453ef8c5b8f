import { z } from 'zod';
import { field, once, readCsvTable } from '../tables';

const rowSchema = z.strictObject({
  element: field.text,
  charge: field.number,
  coordination: field.number,
  radius_angstrom: field.number,
  source: field.text,
  standing: field.standing,
});

const all = once(
  (): ReadonlyMap<string, number> => new Map(readCsvTable('ionic-radii.csv', rowSchema).map((row) => [row.element, row.radius_angstrom])),
);

/**
 * Radius of a trivalent rare earth (or Y) in eightfold coordination.
 *
 * @param element e.g. `La`
 * @returns Å
 * @throws RangeError for an element that is not in reference-tables/ionic-radii.csv
 * @source Shannon 1976 (from memory)
 */
export function ionicRadius(element: string): number {
  const radius = all().get(element);
  if (radius === undefined)
    throw new RangeError(`There is no ionic radius of "${element}" in reference-tables/ionic-radii.csv. It has: ${[...all().keys()].join(', ')}.`);
  return radius;
}
