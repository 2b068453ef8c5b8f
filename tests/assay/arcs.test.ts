import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { cellState, countStates, findAnalyte, readAssays } from 'wedgework';

const folder = join(__dirname, '../data/assay');

/** The sheet as an independent parser reads it: a text for every cell. */
function cellsOf(file: string): { heads: string[]; rows: string[][] } {
  const [heads, ...rows] = Papa.parse<string[]>(readFileSync(join(folder, file), 'utf8'), { skipEmptyLines: true }).data;
  return { heads, rows };
}

// GEOROC compilation "Convergent Margins", doi:10.25625/PVFZCE
describe.each(['kurile-arc.csv', 'aeolian-arc.csv', 'luzon-arc.csv', 'vanuatu-arc.csv'])('%s', (file) => {
  it('imports with nothing lost: rows, labels, and every cell accounted for by its state', async () => {
    const { heads, rows } = cellsOf(file);
    const { suite, report } = await readAssays(join(folder, file), { iron: 'as-given' });
    expect(suite.size).toBe(rows.length);
    const unreadable = new Map(report.columns.map((each) => [each.place, new Set(each.unreadableCells.map(({ address }) => address))]));
    let numbers = 0;
    heads.forEach((head, j) => {
      const entry = report.columns[j];
      expect(entry.head).toBe(head);
      const texts = rows.map((row) => (row[j] ?? '').trim());
      if (entry.became === 'label') {
        expect(suite.label(entry.name)).toEqual(texts);
        return;
      }
      const { values, states } = suite.column(entry.name);
      const wrong = texts.filter((text, i) => {
        if (text === '') return states[i] !== cellState.missing || !Number.isNaN(values[i]);
        if (unreadable.get(entry.place)!.has(`${entry.place}${i + 2}`)) return !Number.isNaN(values[i]);
        numbers++;
        return values[i] !== Number(text);
      });
      expect(wrong).toEqual([]);
      expect(entry.measured + entry.below + entry.above + entry.missing + entry.unreadable).toBe(rows.length);
    });
    expect(numbers).toBe([...suite.columns.values()].reduce((sum, each) => sum + countStates(each)[cellState.measured], 0));
    expect(heads.filter((head) => findAnalyte(head.split(' (')[0]) !== undefined).length).toBe(
      [...suite.columns.keys()].filter((symbol) => findAnalyte(symbol) !== undefined).length,
    );
  });

  it('completes total iron row by row and counts how', async () => {
    const { heads, rows } = cellsOf(file);
    const { report } = await readAssays(join(folder, file));
    const at = (head: string) => heads.indexOf(head);
    const has = (row: string[], head: string) => (row[at(head)] ?? '') !== '';
    const counts = { reportedTotal: 0, summed: 0, ferricAlone: 0, ferrousAlone: 0, none: 0 };
    for (const row of rows) {
      const [total, ferrous, ferric] = ['FeOT (wt%)', 'FeO (wt%)', 'Fe2O3 (wt%)'].map((head) => has(row, head));
      counts[total ? 'reportedTotal' : ferrous && ferric ? 'summed' : ferric ? 'ferricAlone' : ferrous ? 'ferrousAlone' : 'none']++;
    }
    expect(report.iron).toEqual(counts);
  });
});

// ANSS ComCat, U.S. Geological Survey: quoted commas, empty cells
describe('hypocentres-2015-12.csv', () => {
  const path = join(folder, 'hypocentres-2015-12.csv');

  it('imports as it is: coordinates as numbers, all else as text, and says that it has no analyte', async () => {
    const { heads, rows } = cellsOf('hypocentres-2015-12.csv');
    const { suite, report } = await readAssays(path);
    expect(report.pleaseCheck).toContain('no column names an analyte');
    for (const [j, head] of heads.entries()) {
      const texts = rows.map((row) => row[j].trim());
      if (head === 'latitude' || head === 'longitude') expect([...suite.values(head)]).toEqual(texts.map(Number));
      else expect(suite.label(report.columns[j].name)).toEqual(texts);
    }
  });

  it('imports exactly when told what its columns are', async () => {
    const { heads, rows } = cellsOf('hypocentres-2015-12.csv');
    const { suite } = await readAssays(path, {
      headerRow: 1,
      unknown: 'quantities',
      columns: { depth: { quantity: 'depth', unit: 'km' }, mag: { quantity: 'magnitude' }, id: { label: 'sample' } },
    });
    expect(suite.size).toBe(rows.length);
    expect(suite.column('depth').unit).toBe('km');
    const numbers = (head: string) => rows.map((row) => (row[heads.indexOf(head)] === '' ? NaN : Number(row[heads.indexOf(head)])));
    expect([...suite.values('depth')]).toEqual(numbers('depth'));
    expect([...suite.values('magnitude')]).toEqual(numbers('mag'));
    expect([...suite.values('latitude')]).toEqual(numbers('latitude'));
    expect([...suite.values('longitude')]).toEqual(numbers('longitude'));
    expect(suite.label('place')).toEqual(rows.map((row) => row[heads.indexOf('place')]));
    expect(suite.samples).toEqual(rows.map((row) => row[heads.indexOf('id')]));
  });
});
