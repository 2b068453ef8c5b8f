import { z } from 'zod';
import { findAnalyte } from '../chemistry';
import { column, step, suiteOf, type Suite } from '../suite';
import { field, once, readCsvTable } from '../tables';

const file = 'fertility/labelled-districts.csv';
const texts = ['district', 'label', 'basis', 'sample', 'alteration', 'rock', 'georoc_references', 'source', 'standing'];

const rowSchema = z
  .object({
    district: field.text,
    label: z.enum(['fertile', 'barren']),
    basis: field.text,
    sample: field.text,
    alteration: field.optionalText,
    rock: field.optionalText,
    georoc_references: field.text,
    source: field.text,
    standing: field.standing,
  })
  .catchall(field.optionalNumber);

const read = once((): Suite => {
  const rows = readCsvTable(file, rowSchema as z.ZodType<Record<string, string | number | undefined>>);
  const symbols = Object.keys(rows[0]).filter((name) => !texts.includes(name));
  const unknown = symbols.find((symbol) => findAnalyte(symbol) === undefined);
  if (unknown !== undefined) throw new RangeError(`${file}: the column "${unknown}" is not an analyte that the library knows.`);
  return suiteOf({
    columns: symbols.map((symbol) => column({ symbol, values: rows.map((row) => (row[symbol] as number | undefined) ?? NaN) })),
    labels: Object.fromEntries(texts.map((name) => [name, rows.map((row) => String(row[name] ?? ''))])),
    lineage: [step('labelledDistricts', { rows: rows.length }, { sources: ['georoc_convergent_margins_2022'], tables: [file] })],
  });
});

/**
 * The published analyses that the screening score is checked against: labels `district`, `label` (`fertile`: at or beside a known
 * copper-gold deposit; `barren`: no known one), `sample`, `basis` (why the label). The label is of the district, not of the sample.
 *
 * @returns a suite; oxides in wt %, elements in ppm
 * @source GEOROC, Convergent Margins compilation 2022, CC BY-SA 4.0
 * @example labelledDistricts().groupBy('district')
 */
export function labelledDistricts(): Suite {
  return read();
}
