import { cpSync, mkdirSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { createRequire } from 'node:module';
import { basename, join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { chromium as browserType } from 'playwright-core';
import { beforeAll, describe, expect, it } from 'vitest';
import { artifacts, chromium, pictures, pythonRun, root } from './environment';
import { gallery } from './lab';

const { runNotebook } = createRequire(__filename)(join(root, 'kernel-lib/dist/index.js')) as typeof import('../../kernel-lib');
const progressType = 'application/vnd.wedgework.progress+json';

interface Output {
  readonly output_type: string;
  readonly text?: string | string[];
  readonly data?: Readonly<Record<string, string | string[] | object>>;
}

const whole = (content: unknown) => (Array.isArray(content) ? content.join('') : content);

/** What a reader gets of an output; progress lines pass, and their times differ from run to run. */
function plain(outputs: readonly Output[]): unknown[] {
  return outputs
    .filter(({ data }) => !(progressType in (data ?? {})))
    .map(({ output_type, text, data }) => [output_type, whole(text), Object.fromEntries(Object.entries(data ?? {}).map(([type, content]) => [type, whole(content)]))]);
}

/** A place of its own for each way to run, with the notebooks and what they read. */
function place(name: string): string {
  const folder = join(artifacts, 'nbconvert-work', name);
  rmSync(folder, { recursive: true, force: true });
  mkdirSync(folder, { recursive: true });
  cpSync(join(root, 'notebooks'), folder, { recursive: true });
  cpSync(join(__dirname, 'notebooks'), folder, { recursive: true });
  return folder;
}

describe.each([...gallery, 'figures.ipynb'])('%s through nbconvert', (file) => {
  const name = basename(file, '.ipynb');
  const theirs = () => join(artifacts, 'nbconvert-work', 'jupyter', `${name}.nbconvert.ipynb`);
  let figures = 0;
  let folder: string;

  beforeAll(async () => {
    folder = place('jupyter');
    const { status, output } = await pythonRun(['-m', 'nbconvert', '--to', 'notebook', '--execute', '--ExecutePreprocessor.timeout=300', file], folder);
    expect(status, output).toBe(0);
  }, 400_000);

  it('gives the same values, tables and pictures as our runner', async () => {
    const run = await runNotebook(join(place('runner'), file));
    expect(run.failures).toEqual([]);
    const ours = run.notebook.cells.filter(({ type }) => type === 'code').map(({ outputs }) => plain(outputs as unknown as Output[]));
    const cells = (JSON.parse(readFileSync(theirs(), 'utf8')) as { cells: { cell_type: string; outputs?: Output[] }[] }).cells;
    const jupyters = cells.filter(({ cell_type }) => cell_type === 'code').map(({ outputs }) => plain(outputs ?? []));
    expect(jupyters).toEqual(ours);
    figures = run.notebook.cells.flatMap(({ outputs }) => outputs as unknown as Output[]).filter(({ data }) => data?.['image/png'] !== undefined).length;
    expect(figures).toBeGreaterThan(0);
  });

  it('exports every figure to HTML and to LaTeX, by the PNG', async () => {
    const html = await pythonRun(['-m', 'nbconvert', '--to', 'html', theirs(), '--output', `${name}.html`], folder);
    expect(html.status, html.output).toBe(0);
    expect(readFileSync(join(folder, `${name}.html`), 'utf8').match(/<img[^>]*src="data:image\/png;base64/g)).toHaveLength(figures);
    const latex = await pythonRun(['-m', 'nbconvert', '--to', 'latex', theirs(), '--output', `${name}-print`], folder);
    expect(latex.status, latex.output).toBe(0);
    expect(readdirSync(join(folder, `${name}-print_files`)).filter((entry) => entry.endsWith('.png'))).toHaveLength(figures);
    expect(readFileSync(join(folder, `${name}-print.tex`), 'utf8').match(/\\adjustimage/g)).toHaveLength(figures);
  });

  it('prints to PDF, from their page and from ours', async () => {
    const ours = join(folder, `${name}-ours.html`);
    await runNotebook(join(folder, file), { html: ours });
    const browser = await browserType.launch({ executablePath: chromium, args: ['--no-sandbox', '--disable-gpu'] });
    try {
      const page = await browser.newPage();
      const faults: string[] = [];
      page.on('pageerror', (error) => faults.push(error.message));
      page.on('console', (message) => message.type() === 'error' && faults.push(message.text()));
      for (const [source, label] of [[join(folder, `${name}.html`), 'nbconvert'], [ours, 'ours']] as const) {
        // Our page needs nothing from elsewhere; theirs asks for its scripts, which a printed page does not need.
        await page.route(/^https?:/, (route) => route.abort());
        faults.length = 0;
        await page.goto(pathToFileURL(source).href);
        if (label === 'ours') expect(faults).toEqual([]);
        const pdf = await page.pdf({ path: join(pictures, `${name}-${label}.pdf`), format: 'A4', printBackground: true });
        expect(pdf.toString('latin1').match(/\/Subtype ?\/Image/g)?.length ?? 0).toBeGreaterThanOrEqual(figures);
      }
    } finally {
      await browser.close();
    }
  });
});
