import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { howToNotebook } from '../../notebooks/site/how-to-notebook.mjs';
import { built } from '../kernel/engine';

const { runNotebook } = createRequire(__filename)(join(built, 'index.js')) as typeof import('../../kernel-lib');
const notebooks = join(__dirname, '../../notebooks');
const scratch = mkdtempSync(join(tmpdir(), 'wedgework-pages-'));
afterAll(() => rmSync(scratch, { recursive: true, force: true }));

describe('every how-to page', () => {
  for (const file of readdirSync(join(notebooks, 'how-to'))) {
    it(`${file}: runs as it is printed`, async () => {
      const notebook = join(scratch, file.replace('.md', '.ipynb'));
      writeFileSync(notebook, howToNotebook(readFileSync(join(notebooks, 'how-to', file), 'utf8')));
      const { failures, cellsRun } = await runNotebook(notebook, { folder: notebooks, scratch });
      expect(failures.map(({ cell, ename, evalue }) => `cell ${cell}: ${ename}: ${evalue}`)).toEqual([]);
      expect(cellsRun).toBeGreaterThan(0);
    });
  }
});

describe('every gallery notebook', () => {
  for (const file of readdirSync(notebooks).filter((name) => name.endsWith('.ipynb'))) {
    it(`${file}: runs from top to bottom, in fewer than 25 cells, kept without outputs`, async () => {
      const { cells } = JSON.parse(readFileSync(join(notebooks, file), 'utf8')) as { cells: { outputs?: unknown[] }[] };
      expect(cells.length).toBeLessThan(25);
      expect(cells.flatMap(({ outputs = [] }) => outputs)).toEqual([]);
      const { failures, notebook } = await runNotebook(join(notebooks, file), { scratch });
      expect(failures.map(({ cell, ename, evalue }) => `cell ${cell}: ${ename}: ${evalue}`)).toEqual([]);
      const figures = notebook.cells.flatMap(({ outputs }) => outputs).filter(({ data }) => data !== undefined && 'image/png' in (data as object));
      expect(figures.length).toBeGreaterThan(1);
    });
  }
});
