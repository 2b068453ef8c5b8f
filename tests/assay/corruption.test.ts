import { readFileSync, writeFileSync } from 'node:fs';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { AssayError, cellState, readAssays, seededRandom, type Assays, type SeededRandom } from 'wedgework';
import { columnLetters } from '../../kernel-lib/assay/grid';
import { temporary } from './helpers';

const heads = ['Sample', 'Rock', 'SiO2 (wt%)', 'MgO (wt%)', 'Ba (ppm)', 'Sr (ppm)', 'Th (ppm)', 'Yb (ppm)'];
const symbols = ['', '', 'SiO2', 'MgO', 'Ba', 'Sr', 'Th', 'Yb'];
const sampleNames = Array.from({ length: 9 }, (_, i) => `KE-${101 + i}`);

/** Every number of the sheet stands in it once, so that a number tells where it came from. */
const number = (row: number, column: number) => `${[0, 0, 50, 5, 200, 400, 1, 2][column]}.${row + 1}${column}7`;
const original = [
  heads,
  ...sampleNames.map((name, row) => [
    name,
    row === 4 ? '"tuff, grey"' : 'lava',
    ...[2, 3, 4, 5, 6, 7].map((column) => ((row + column) % 7 === 0 ? `<${number(row, column)}` : number(row, column))),
  ]),
];
const sheet = `${original.map((row) => row.join(',')).join('\n')}\n`;

/** One way of damaging a text each. */
const damages: Readonly<Record<string, (text: string, random: SeededRandom) => string>> = {
  'a character lost': (text, random) => splice(text, at(text, random), 1, ''),
  'a piece cut out': (text, random) => splice(text, at(text, random), Math.floor(random.uniform() * 40), ''),
  'a piece doubled': (text, random) => {
    const from = at(text, random);
    return splice(text, from, 0, text.slice(from, from + Math.floor(random.uniform() * 60)));
  },
  'the end cut off': (text, random) => text.slice(0, at(text, random)),
  'a quotation mark added': (text, random) => splice(text, at(text, random), 0, '"'),
  'a delimiter added': (text, random) => splice(text, at(text, random), 0, ','),
  'a delimiter lost': (text, random) => loseOne(text, ',', random),
  'a line break lost': (text, random) => loseOne(text, '\n', random),
  'a line break added': (text, random) => splice(text, at(text, random), 0, '\n'),
  'two cells exchanged': (text, random) => {
    const rows = text.split('\n').map((line) => line.split(','));
    const pick = (): [number, number] => {
      const row = Math.floor(random.uniform() * (rows.length - 1));
      return [row, Math.floor(random.uniform() * rows[row].length)];
    };
    const [[a, b], [c, d]] = [pick(), pick()];
    [rows[a][b], rows[c][d]] = [rows[c][d], rows[a][b]];
    return rows.map((row) => row.join(',')).join('\n');
  },
  'a line doubled': (text, random) => {
    const lines = text.split('\n');
    const row = Math.floor(random.uniform() * lines.length);
    return [...lines.slice(0, row), lines[row], ...lines.slice(row)].join('\n');
  },
  'a character changed': (text, random) => splice(text, at(text, random), 1, '"\',;<>-+.=0eé\t\r\0'[Math.floor(random.uniform() * 16)]),
};

const at = (text: string, random: SeededRandom) => Math.floor(random.uniform() * text.length);
const splice = (text: string, from: number, count: number, put: string) => text.slice(0, from) + put + text.slice(from + count);

function loseOne(text: string, character: string, random: SeededRandom): string {
  const places = [...text].flatMap((each, i) => (each === character ? [i] : []));
  return places.length === 0 ? text : splice(text, places[Math.floor(random.uniform() * places.length)], 1, '');
}

/**
 * Values that stand in another row or column than in the damaged sheet (as an independent parser reads it) and than in the undamaged one,
 * without the report naming their row.
 */
function movedSilently({ suite, report }: Assays, damaged: string): string[] {
  // A lone carriage return ends a row, as in the sheets of old computers.
  const grid = Papa.parse<string[]>(damaged.replace(/\r\n?/g, '\n'), { delimiter: report.delimiter }).data;
  const headRow = grid.findIndex((row) => row.some((cell) => /\((wt%|ppm)\)/.test(cell)));
  const width = grid[headRow]?.length ?? 0;
  const told = report.pleaseCheck.join('\n');
  const headOf = new Map(report.columns.map((each) => [each.name, each.head]));
  const place = new Map(report.columns.map((each) => [each.name, each.place]));
  const letters = new Map(Array.from({ length: 60 }, (_, j) => [columnLetters(j), j]));
  const moved: string[] = [];
  let from = 0;
  for (let i = 0; i < suite.size; i++) {
    const sampleColumn = letters.get(place.get('sample') ?? '') ?? -1;
    const row = sampleColumn < 0 ? -1 : grid.findIndex((cells, k) => k >= from && (cells[sampleColumn] ?? '').trim() === suite.samples[i]);
    if (row >= 0) from = row + 1;
    const rowTold = new RegExp(`\\brow ${row + 1}\\b|rows [\\d, ]*\\b${row + 1}\\b`).test(told) || /quotation mark|names other analytes/.test(told);
    for (const [symbol, { values, states, limits }] of suite.columns) {
      const shown = states[i] === cellState.belowDetection ? (limits?.[i] ?? NaN) : values[i];
      if (!Number.isFinite(shown) || rowTold) continue;
      const origin = original.findIndex(
        (cells, k) => k > 0 && cells.some((cell, j) => symbols[j] === symbol && Number(cell.replace('<', '')) === shown),
      );
      if (origin > 0 && sampleNames[origin - 1] === suite.samples[i]) continue;
      const cell = row < 0 ? undefined : grid[row][letters.get(place.get(symbol) ?? '') ?? -1];
      const sits =
        cell !== undefined &&
        Number(cell.replace(/^\s*<\s*/, '').replace(/\s|\*$/g, '')) === shown &&
        grid[row].length >= width &&
        grid[row].slice(width).every((each) => each.trim() === '');
      // A damaged head may name another analyte; then the head itself must be told.
      const head = headOf.get(symbol) ?? '';
      const columnTold = !heads.includes(head) && told.includes(`"${head}"`);
      if (!sits && !columnTold && !(cell !== undefined && told.includes(`"${cell.trim()}"`))) moved.push(`${suite.samples[i]} ${symbol} = ${shown}`);
    }
  }
  return moved;
}

describe('damaged sheets', () => {
  it('5,000 corruptions: never a crash, never a value that moved unreported', async () => {
    const random = seededRandom(20_311, 'tests');
    const names = Object.keys(damages);
    const path = temporary('damaged.csv');
    const problems: string[] = [];
    let read = 0;
    for (let run = 0; run < 5000; run++) {
      const name = names[run % names.length];
      let damaged = damages[name](sheet, random);
      if (run % 5 === 0) damaged = damages[names[Math.floor(random.uniform() * names.length)]](damaged, random);
      writeFileSync(path, damaged);
      try {
        const assays = await readAssays(path, { iron: 'as-given' });
        read++;
        const moved = movedSilently(assays, damaged);
        if (moved.length > 0) problems.push(`${run} ${name}: ${moved.slice(0, 3).join('; ')}\n${damaged}\n${assays.report.pleaseCheck.join('\n')}`);
      } catch (error) {
        if (!(error instanceof AssayError)) problems.push(`${run} ${name}: ${(error as Error).stack}\n${damaged}`);
      }
    }
    expect(problems.slice(0, 3).join('\n\n')).toBe('');
    expect(problems).toHaveLength(0);
    expect(read).toBeGreaterThan(4000);
  }, 60_000);

  it('reads the undamaged sheet in full', async () => {
    const path = temporary('whole.csv');
    writeFileSync(path, sheet);
    const { suite, report } = await readAssays(path, { iron: 'as-given' });
    expect(report.pleaseCheck).toEqual([]);
    expect(suite.samples).toEqual(sampleNames);
    expect(readFileSync(path, 'utf8').match(/<?\d+\.\d+/g)!.length).toBe(6 * 9);
  });
});
