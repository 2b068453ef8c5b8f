import { z } from 'zod';
import { field, once, readCsvTable, type Standing } from '../tables';

/** One published number of how an element leaves the slab: a bulk coefficient, or the percentage released by dehydration. */
export interface SlabPartitioning {
  readonly source: string;
  /** Source key of the work in which the number was read, where that is another. */
  readonly readIn: string;
  /** The phase that leaves: `aqueous fluid`, `supercritical liquid`, `hydrous melt` … */
  readonly medium: string;
  /** Pressure in GPa, where it is given. */
  readonly pressure: number | undefined;
  /** The solid that stays. */
  readonly solid: string;
  readonly element: string;
  readonly value: number;
  readonly quantity: 'solid/fluid' | 'solid/melt' | 'percent released';
  readonly standing: Standing;
  readonly confidence: string;
  readonly note: string;
}

const rowSchema = z.strictObject({
  source: field.text,
  read_in: field.optionalText,
  medium: field.text,
  pressure_gpa: field.optionalNumber,
  solid: field.text,
  element: field.text,
  value: field.number,
  quantity: z.enum(['solid/fluid', 'solid/melt', 'percent released']),
  standing: field.standing,
  confidence: field.text,
  note: field.optionalText,
});

const all = once((): readonly SlabPartitioning[] =>
  readCsvTable('slab-fluid-partitioning.csv', rowSchema).map(({ read_in: readIn, pressure_gpa: pressure, ...row }) => ({ ...row, readIn, pressure })),
);

/** Every number of reference-tables/slab-fluid-partitioning.csv. */
export function slabPartitioning(): readonly SlabPartitioning[] {
  return all();
}

/**
 * The bulk solid/liquid coefficients of one published set.
 *
 * @param source source key, e.g. `kessel_2005`
 * @param solid part of the name of the solid (default: any, the first in the table)
 * @returns by element
 * @throws RangeError listing the sets there are
 * @example slabCoefficients('xiong_2006', 'rutile').get('Nb')?.value // 0.97
 */
export function slabCoefficients(source: string, solid = ''): ReadonlyMap<string, SlabPartitioning> {
  const rows = all().filter((row) => row.source === source && row.solid.includes(solid) && row.quantity !== 'percent released');
  if (rows.length === 0) {
    const sets = [
      ...new Set(
        all()
          .filter(({ quantity }) => quantity !== 'percent released')
          .map((row) => `${row.source} (${row.solid})`),
      ),
    ];
    throw new RangeError(
      `There are no slab coefficients of "${source}"${solid === '' ? '' : ` for a solid with "${solid}" in its name`}. There are: ${sets.join('; ')}.`,
    );
  }
  const first = rows[0].solid;
  return new Map(rows.filter((row) => row.solid === first).map((row) => [row.element, row]));
}
