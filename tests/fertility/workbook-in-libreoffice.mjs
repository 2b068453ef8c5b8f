#!/usr/bin/env node
// Opens the workbook of a screening in LibreOffice without a window: node tests/fertility/workbook-in-libreoffice.mjs [folder]
// Needs a build (npm run build) and LibreOffice Calc (`soffice`). Writes screening.xlsx, .pdf and .csv into the folder (default: a temporary
// one) and fails if the program cannot read the workbook or reads other texts than were written. Not part of npm test.
import { execFileSync } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, readFileSync, statSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import Papa from 'papaparse';

const root = dirname(dirname(dirname(fileURLToPath(import.meta.url))));
const ww = createRequire(import.meta.url)(join(root, 'kernel-lib', 'dist', 'index.js'));
const folder = process.argv[2] === undefined ? mkdtempSync(join(tmpdir(), 'workbook-')) : resolve(process.argv[2]);
mkdirSync(folder, { recursive: true });

const { suite } = await ww.readAssays(join(root, 'notebooks', 'data', 'oruvai-intrusions.csv'));
const screen = ww.screenFertility(suite, { group: 'Intrusion' });
const workbook = join(folder, 'screening.xlsx');
await ww.saveFertilityWorkbook(screen, workbook);

function convert(to) {
  // A profile of its own, so that a LibreOffice that is open does not take the work over and refuse it.
  execFileSync(
    'soffice',
    [`-env:UserInstallation=file://${join(folder, 'profile')}`, '--headless', '--convert-to', to, '--outdir', folder, workbook],
    { stdio: 'pipe', timeout: 180_000 },
  );
}
convert('pdf');
convert('csv:Text - txt - csv (StarCalc):44,34,76,1');

const pdf = join(folder, 'screening.pdf');
if (!existsSync(pdf) || statSync(pdf).size < 10_000) throw new Error('LibreOffice made no PDF of the workbook.');
const [, ...rows] = Papa.parse(readFileSync(join(folder, 'screening.csv'), 'utf8'), { skipEmptyLines: true }).data;
const read = rows.map((row) => [row[0], row[1], row[2]].join(' | '));
const written = screen.groups.map(({ rank, group, verdict }) => [rank, group, verdict].join(' | '));
if (JSON.stringify(read) !== JSON.stringify(written)) throw new Error(`LibreOffice reads other verdicts than were written:\n${read.join('\n')}`);
console.log(`LibreOffice opened the workbook: ${written.length} verdicts read back as written; pages to look at: ${pdf}`);
