import { escapeSpreadsheet } from '../display';
import { joinLineages, writeLineageBeside, type Column, type Traced } from '../suite';
import { ByteSink } from './byte-sink';
import { csvText } from './csv-text';

/** Texts by the name of their column, one a row. */
export type TableLabels = Readonly<Record<string, readonly string[]>> | ReadonlyMap<string, readonly string[]>;

/** A column of a written table: a column of a suite, or a name with numbers. */
export type TableColumn = Column | { readonly name: string; readonly values: ArrayLike<number> };

const comma = 0x2c;
const newline = 0x0a;

/**
 * Writes a table of results as .csv: labels first, then the columns, one row a sample; six significant digits; a cell without a usable
 * value is empty. Use `writeAssays` for a suite that shall be read back without loss.
 *
 * The file gets its name when it is complete, so a run that stops leaves nothing half-written. Texts that a spreadsheet program would take
 * for a formula get an apostrophe.
 *
 * @param path of the .csv file; folders are made
 * @param columns n values each
 * @param labels n texts each; `sample` names
 * @param of results that the table was made of: their lineage then stands beside the file, as `<path>.lineage.json`
 * @throws RangeError when the lengths differ or a name is used twice
 * @example await writeTable('results.csv', [dry.column('SiO2')], { sample: dry.samples })
 */
export async function writeTable(path: string, columns: readonly TableColumn[], labels: TableLabels = {}, of: readonly Traced[] = []): Promise<void> {
  const texts: [string, readonly string[]][] =
    labels instanceof Map ? [...labels] : Object.entries(labels as Readonly<Record<string, readonly string[]>>);
  const numbers = columns.map((each): [string, ArrayLike<number>] => ['symbol' in each ? each.symbol : each.name, each.values]);
  const size = checkedSize([...texts, ...numbers]);
  const sink = new ByteSink(path);
  try {
    sink.text(`${[...texts, ...numbers].map(([name]) => csvText(escapeSpreadsheet(name))).join(',')}\n`);
    const cells = new Map<string, string>();
    const cellOf = (text: string): string => {
      let cell = cells.get(text);
      if (cell === undefined) {
        cell = csvText(escapeSpreadsheet(text));
        // Names of rocks and groups repeat; sample names do not, and need not be kept.
        if (cells.size < 5_000) cells.set(text, cell);
      }
      return cell;
    };
    for (let row = 0; row < size; row++) {
      let first = true;
      for (let j = 0; j < texts.length; j++) {
        if (!first) sink.byte(comma);
        first = false;
        sink.text(cellOf(texts[j][1][row]));
      }
      for (let j = 0; j < numbers.length; j++) {
        if (!first) sink.byte(comma);
        first = false;
        sink.number(numbers[j][1][row]);
      }
      sink.byte(newline);
      if (row % 8192 === 8191) await new Promise(setImmediate);
    }
    sink.finish();
    if (of.length > 0) writeLineageBeside(path, joinLineages(...of.map(({ lineage }) => lineage)));
  } catch (error) {
    sink.abandon();
    throw error;
  }
}

function checkedSize(all: readonly (readonly [string, ArrayLike<unknown>])[]): number {
  const names = new Set<string>();
  for (const [name, { length }] of all) {
    if (names.has(name)) throw new RangeError(`writeTable: two columns are named "${name}"; give each its own name.`);
    names.add(name);
    if (length !== all[0][1].length)
      throw new RangeError(`writeTable: "${name}" has ${length} rows, "${all[0][0]}" has ${all[0][1].length}; all must agree.`);
  }
  return all[0]?.[1].length ?? 0;
}
