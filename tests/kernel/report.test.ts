import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import * as XLSX from '@e965/xlsx';
import { afterAll, describe, expect, it } from 'vitest';
import { classify, column, diagrams, readAssays, report, saveReport, suiteOf, volatileFree } from 'wedgework';
import { tableBlocks } from '../../kernel-lib/kernel/report/blocks';
import { notebookBlocks } from '../../kernel-lib/kernel/report/notebook-blocks';
import { reportPage } from '../../kernel-lib/kernel/report/page';
import { parseNotebook } from '../../kernel-lib/kernel/notebook/document';
import { sheet } from './made-run';

const folder = mkdtempSync(join(tmpdir(), 'wedgework-report-'));
afterAll(() => rmSync(folder, { recursive: true }));
writeFileSync(join(folder, 'lavas.csv'), sheet);

const parts = async () => {
  const assays = await readAssays(join(folder, 'lavas.csv'));
  const dry = volatileFree(assays.suite);
  return {
    title: 'Six lavas <of Oruvai>',
    summary: { 'Rows read': 6 },
    figures: [diagrams.tas(dry, { group: 'volcano' })],
    tables: { Analyses: dry, Names: classify(dry, ['tas']) },
    quality: { 'Import report': assays },
    cautions: ['Six samples are few.'],
  };
};

describe('report', () => {
  it('writes a page that needs nothing else, with headings in order and a text for every figure', async () => {
    const path = join(folder, 'report.html');
    await saveReport(await report(await parts()), path);
    const page = readFileSync(path, 'utf8');
    expect(page).toContain('<h1>Six lavas &lt;of Oruvai&gt;</h1>');
    expect(page).not.toMatch(/<script|https?:\/\/(?!doi)[^"'\s]*\.(?:js|css|png)|src="(?!data:)/);
    const levels = [...page.matchAll(/<h(\d)/g)].map(([, level]) => Number(level));
    levels.forEach((level, i) => expect(level - (levels[i - 1] ?? 0), `heading ${i + 1}`).toBeLessThanOrEqual(1));
    for (const [image] of page.matchAll(/<img [^>]*>/g)) expect(image).toMatch(/alt="[^"]{10,}"/);
    for (const heading of ['Summary', 'Figures', 'Results', 'Quality control', 'Cautions', 'Methods', 'Sources', 'Lineage']) expect(page).toContain(`>${heading}</h2>`);
    expect(page).toContain('Six samples are few.');
    expect(page).toContain('competent');
    expect(page).toContain('Le Bas M.J.');
  });

  it('writes the same bytes again, as page, PDF and workbook', async () => {
    for (const kind of ['html', 'pdf', 'xlsx']) {
      const [one, two] = [join(folder, `one.${kind}`), join(folder, `two.${kind}`)];
      for (const path of [one, two]) await saveReport(await report(await parts()), path);
      expect(readFileSync(one).equals(readFileSync(two)), kind).toBe(true);
    }
    expect(readFileSync(join(folder, 'one.pdf')).subarray(0, 5).toString()).toBe('%PDF-');
  });

  it('writes a workbook with a sheet for each result and for quality control, methods, sources and lineage; limits stay limits', async () => {
    const path = join(folder, 'results.xlsx');
    await saveReport(await report(await parts()), path);
    const book = XLSX.read(readFileSync(path));
    expect(book.SheetNames).toEqual(['Analyses', 'Names', 'Quality control', 'Methods', 'Sources', 'Lineage']);
    const rows = XLSX.utils.sheet_to_json<Record<string, unknown>>(book.Sheets.Analyses);
    expect(rows).toHaveLength(6);
    expect(rows[2]).toMatchObject({ sample: 'K-3', volcano: 'Ketu', 'Th (ppm)': '<0.05' });
    expect(rows[0]['SiO2 (wt%)']).toBeTypeOf('number');
  });

  it('puts the whole of a long table into the workbook', async () => {
    const long = suiteOf({ columns: [column({ symbol: 'Ba', values: Array.from({ length: 500 }, (_, i) => i) })] });
    const path = join(folder, 'long.xlsx');
    await saveReport(await report({ title: 'Long', tables: { All: long } }), path);
    expect(XLSX.utils.sheet_to_json(XLSX.read(readFileSync(path)).Sheets.All)).toHaveLength(500);
  });

  it('makes names that a spreadsheet would compute inert', async () => {
    const hostile = suiteOf({ columns: [column({ symbol: 'Ba', values: [1] })], labels: { sample: ['=1+1'] } });
    const path = join(folder, 'hostile.xlsx');
    await saveReport(await report({ title: 'Hostile', tables: { All: hostile } }), path);
    const cell = XLSX.read(readFileSync(path)).Sheets.All.A2 as XLSX.CellObject;
    expect(cell.f).toBeUndefined();
    expect(String(cell.v)).not.toMatch(/^=/);
  });

  it('says what is wrong with its parts, and leaves no half-written file', async () => {
    await expect(report({} as never)).rejects.toThrow('an object with a title');
    await expect(report({ title: 'x', tables: { A: {} as never } })).rejects.toThrow('"A" is not a result of this library');
    const made = await report({ title: 'x' });
    await expect(saveReport(made, join(folder, 'x.doc'))).rejects.toThrow('must end in .html, .pdf or .xlsx');
    await expect(saveReport(made, join(folder, 'x.xlsx'))).rejects.toThrow('holds no tables');
    await expect(saveReport(Promise.resolve(made) as never, 'x.html')).rejects.toThrow('forget to await');
    expect(readdirSync(folder).filter((name) => name.startsWith('.') || name === 'x.xlsx')).toEqual([]);
  });
});

describe('a report of a notebook', () => {
  const notebook = parseNotebook(
    JSON.stringify({
      cells: [
        { cell_type: 'markdown', id: 'a', metadata: {}, source: '# Title\n\nText with <script>alert(1)</script>.\n\n## Part\n```\n# no heading\n```' },
        { cell_type: 'code', id: 'b', metadata: {}, execution_count: 1, source: 'secret()', outputs: [{ output_type: 'error', ename: 'Error', evalue: 'gone', traceback: [] }] },
        { cell_type: 'code', id: 'c', metadata: {}, execution_count: 2, source: 'x', outputs: [{ output_type: 'execute_result', execution_count: 2, metadata: {}, data: { 'text/html': '<table><thead><tr><th>a</th></tr></thead><tbody><tr><td>&lt;5</td></tr></tbody></table><p>note</p>' } }] },
      ],
      metadata: {}, nbformat: 4, nbformat_minor: 5,
    }),
    'made',
  );

  it('has its texts, tables and failures, and no code', () => {
    const { title, blocks } = notebookBlocks(notebook);
    expect(title).toBe('Title');
    const page = reportPage(title, blocks);
    expect(page).not.toContain('secret()');
    expect(page).not.toContain('<script');
    expect(page).toContain('This step failed: Error: gone');
    expect(page).toContain('&lt;5');
    expect(blocks.filter(({ kind }) => kind === 'heading')).toHaveLength(1);
  });

  it('reads a shown table back whole', () => {
    expect(tableBlocks('<table><caption>T &amp; U</caption><thead><tr><th>a</th><th>b</th></tr></thead><tbody><tr><td>&lt;5</td><td>x</td></tr></tbody></table><p>note</p>')).toEqual([
      { kind: 'table', title: 'T & U', columns: ['a', 'b'], rows: [['<5', 'x']], notes: ['note'] },
    ]);
  });
});
