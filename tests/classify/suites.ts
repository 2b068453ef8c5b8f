import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';
import { column, suiteOf, type Suite } from 'wedgework';

export type Cells = Readonly<Record<string, number>>;

/** A suite of rows given as objects; a symbol that a row lacks is missing there. */
export function suiteFrom(rows: readonly Cells[], extra: { labels?: Record<string, string[]>; sigma?: Cells } = {}): Suite {
  const symbols = [...new Set(rows.flatMap((row) => Object.keys(row)))];
  const columns = symbols.map((symbol) => {
    const values = rows.map((row) => row[symbol] ?? NaN);
    const sigma = extra.sigma?.[symbol];
    return column({ symbol, values, ...(sigma === undefined ? {} : { sigma: values.map(() => sigma) }) });
  });
  return suiteOf({ columns, labels: extra.labels });
}

/** A volatile-free analysis with the given oxides; alumina takes what is left to 100. */
export function rock(given: Cells): Cells {
  const base = { SiO2: 55, TiO2: 0.8, FeOT: 7, MnO: 0.1, MgO: 4, CaO: 7, Na2O: 3, K2O: 1, P2O5: 0.2, ...given };
  const sum = Object.entries(base).reduce((all, [symbol, value]) => all + (symbol === 'Al2O3' || Number.isNaN(value) ? 0 : value), 0);
  return { Al2O3: 100 - sum, ...base };
}

export const read = (file: string) => readFileSync(join(__dirname, '../data/classify', file), 'utf8');

/** The four arcs of open analyses (GEOROC; see tests/data/README.md), one suite each. */
export function fourArcs(): ReadonlyMap<string, Suite> {
  const rows = Papa.parse<Record<string, string>>(read('four-arcs.csv'), { header: true, skipEmptyLines: true }).data;
  const arcs = new Map<string, Record<string, string>[]>();
  for (const row of rows) (arcs.get(row.arc) ?? arcs.set(row.arc, []).get(row.arc)!).push(row);
  return new Map(
    [...arcs].map(([arc, own]) => {
      const symbols = Object.keys(own[0]).filter((name) => name !== 'arc' && name !== 'sample');
      const columns = symbols.map((symbol) => column({ symbol, values: own.map((row) => (row[symbol] === '' ? NaN : Number(row[symbol]))) }));
      return [arc, suiteOf({ columns, labels: { sample: own.map((row) => row.sample) } })];
    }),
  );
}
