import { execFile } from 'node:child_process';
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import Ajv from 'ajv';
import fc from 'fast-check';
import { afterAll, describe, expect, it } from 'vitest';
import { formatNotebook, NotebookFormatError, parseNotebook, type Notebook } from '../../kernel-lib/kernel/notebook/document';
import { notebookHtml } from '../../kernel-lib/kernel/notebook/html';
import { parameterNames, parseSetting, withParameters } from '../../kernel-lib/kernel/notebook/parameters';
import { built, runNotebook } from './engine';

const notebooks = join(__dirname, 'notebooks');
const threeLavas = join(notebooks, 'three-lavas.ipynb');
const folder = mkdtempSync(join(tmpdir(), 'wedgework-notebooks-'));
afterAll(() => rmSync(folder, { recursive: true }));

// The published JSON schema of the format (nbformat 4.5), written for an older draft of JSON Schema than its validator's default.
const schema = JSON.parse(readFileSync(join(__dirname, '../data/kernel/nbformat.v4.5.schema.json'), 'utf8')) as Record<string, unknown>;
delete schema.$schema;
const valid = new Ajv({ strict: false, validateFormats: false }).compile(schema);
const problems = (text: string) => (valid(JSON.parse(text)) ? [] : valid.errors);

const read = (path: string) => parseNotebook(readFileSync(path, 'utf8'), path);
const code = (source: string, tags: string[] = [], id = source): Notebook['cells'][number] => ({ type: 'code', id, metadata: { tags }, source, outputs: [], executionCount: null });

describe('the notebook format', () => {
  it('gives cells without ids stable ones, and keeps those there are', () => {
    const first = read(threeLavas);
    expect(new Set(first.cells.map(({ id }) => id)).size).toBe(first.cells.length);
    expect(read(threeLavas).cells.map(({ id }) => id)).toEqual(first.cells.map(({ id }) => id));
    expect(read(join(notebooks, 'failing.ipynb')).cells.map(({ id }) => id)).toEqual(['first', 'second', 'third']);
  });

  it('writes what the published schema allows, and reads it back the same', () => {
    const text = formatNotebook(read(threeLavas));
    expect(problems(text)).toEqual([]);
    expect(formatNotebook(parseNotebook(text, 'again'))).toBe(text);
  });

  it('keeps any text of any cell', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(fc.constantFrom('code' as const, 'markdown' as const, 'raw' as const), fc.string({ unit: 'grapheme' }))), (cells) => {
        const raw = JSON.stringify({ nbformat: 4, nbformat_minor: 2, metadata: {}, cells: cells.map(([cell_type, source]) => ({ cell_type, source, metadata: {} })) });
        const text = formatNotebook(parseNotebook(raw, 'made'));
        expect(problems(text)).toEqual([]);
        expect(parseNotebook(text, 'made').cells.map(({ source }) => source)).toEqual(cells.map(([, source]) => source));
      }),
    );
  });

  it.each([
    ['', 'not valid JSON'],
    ['{"cells": [', 'not valid JSON'],
    ['[]', 'no list of cells'],
    ['{"worksheets": [], "nbformat": 3}', 'no list of cells'],
    ['{"cells": [], "nbformat": 5}', 'format 5'],
    ['{"cells": [7], "nbformat": 4}', 'cell 1: a cell must be an object'],
    ['{"cells": [{"cell_type": "sound", "source": ""}], "nbformat": 4}', 'cell_type is "sound"'],
    ['{"cells": [{"cell_type": "code", "source": [1]}], "nbformat": 4}', 'source must be text'],
  ])('says what is wrong with %j', (text, message) => {
    expect(() => parseNotebook(text, 'mine.ipynb')).toThrow(NotebookFormatError);
    expect(() => parseNotebook(text, 'mine.ipynb')).toThrow(message);
    expect(() => parseNotebook(text, 'mine.ipynb')).toThrow('mine.ipynb');
  });
});

describe('parameters', () => {
  const notebook: Notebook = { metadata: {}, cells: [code('const sheet = "a, b = c", limit: number = 5;\nlet groups = ["x"];\n// const not = 1', ['parameters']), code('sheet')] };

  it('are the names that the tagged cell declares', () => {
    expect(parameterNames(notebook)).toEqual(expect.arrayContaining(['sheet', 'limit', 'groups']));
    expect(parameterNames(notebook)).not.toContain('not');
  });

  it('are put in after that cell, and put in anew in an executed notebook', () => {
    const once = withParameters(notebook, { limit: 7, sheet: 'it\'s "x"' });
    expect(once.cells.map(({ id }) => id).slice(1, 2)).toEqual(['injected-parameters']);
    expect(once.cells[1].source).toBe('// Values given for this run.\nconst limit = 7;\nconst sheet = "it\'s \\"x\\"";');
    expect(withParameters(once, { limit: 8 }).cells).toHaveLength(3);
    expect(withParameters(once, {}).cells).toHaveLength(2);
  });

  it('refuse an unknown name and a notebook without any', () => {
    expect(() => withParameters(notebook, { shete: 'x' })).toThrow('no parameter "shete". It has: sheet, limit, groups.');
    expect(() => withParameters({ metadata: {}, cells: [code('1')] }, { a: 1 })).toThrow('takes no parameters');
  });

  it('are read from the command line as JSON or text', () => {
    expect(['a=1', 'a=x.csv', 'a="1"', 'a=', 'a=001', 'a=["Ba"]', 'a=b=c', 'a=true'].map((text) => parseSetting(text)[1])).toEqual([1, 'x.csv', '1', '', '001', ['Ba'], 'b=c', true]);
    for (const bad of ['a', '=1', 'a b=1', '']) expect(() => parseSetting(bad)).toThrow('--set takes name=value');
  });
});

describe('a run', () => {
  it('executes, joins streams, keeps results, drops passing progress, and gives the summary', async () => {
    const out = join(folder, 'run', 'three.ipynb');
    const html = join(folder, 'run', 'three.html');
    const events: string[] = [];
    const run = await runNotebook(threeLavas, { set: { limit: 53 }, out, html, onProgress: (event) => events.push(event.kind) });
    expect(run).toMatchObject({ status: 'ok', failures: [], cellsRun: 7, cellsInAll: 7 });
    expect(run.written).toEqual(expect.arrayContaining([out, html]));
    expect(run.summary).toEqual([['Rows read', 3], ['Above the limit', 2]]);
    expect(events).toEqual(expect.arrayContaining(['cell', 'task', 'stream']));
    const text = readFileSync(out, 'utf8');
    expect(problems(text)).toEqual([]);
    expect(text).not.toContain('vnd.wedgework.progress');
    const codes = run.notebook.cells.filter(({ type }) => type === 'code');
    expect(codes.map(({ executionCount }) => executionCount)).toEqual([1, 2, 3, 4, 5, 6, 7]);
    expect(codes[4].outputs.map((output) => output.output_type)).toEqual(['display_data', 'execute_result']);
    expect(codes[4].outputs[1]).toMatchObject({ execution_count: 5 });
    expect(codes[5].outputs).toEqual([]);
    expect(readdirSync(join(folder, 'run')).sort()).toEqual(run.written.map((path) => basename(path)).sort());
  });

  it('is the same to the byte each time', async () => {
    const texts: string[] = [];
    for (let i = 0; i < 2; i++) texts.push(formatNotebook((await runNotebook(threeLavas)).notebook));
    expect(texts[1]).toBe(texts[0]);
  });

  it('stops at a failing cell and says where, or goes on when asked', async () => {
    const file = join(notebooks, 'failing.ipynb');
    const run = await runNotebook(file, { html: join(folder, 'failing.html') });
    expect(run).toMatchObject({ status: 'failed', cellsRun: 2, failures: [{ cell: 2, id: 'second', ename: 'RangeError', evalue: 'no <such> column' }] });
    expect(run.failures[0].traceback[1]).toMatch(/cell \[2\], line 2: {2}throw new RangeError/);
    expect(run.notebook.cells[2].outputs).toEqual([]);
    expect(readFileSync(join(folder, 'failing.html'), 'utf8')).toContain('no &lt;such&gt; column');
    const on = await runNotebook(file, { keepGoing: true });
    expect(on).toMatchObject({ status: 'failed', cellsRun: 3 });
    expect(on.notebook.cells[2].outputs[0]).toMatchObject({ name: 'stdout', text: 'after 1\n' });
  });

  const written = (...sources: string[]) => {
    const file = join(folder, `made-${sources.join('').length}.ipynb`);
    writeFileSync(file, formatNotebook({ metadata: {}, cells: sources.map((source, i) => code(source, [], `c${i}`)) }));
    return file;
  };

  it('gives up a cell that takes too long, and one that cannot be stopped', async () => {
    const run = await runNotebook(written('const a = 1', 'while (true) {}', 'a'), { timeout: 4 });
    expect(run).toMatchObject({ status: 'timed out', cellsRun: 2, failures: [{ ename: 'CellTimeout', cell: 2 }] });
    expect(run.notebook.cells[1].outputs).toHaveLength(1);
  });

  it('tells that the process of the notebook ended', async () => {
    const run = await runNotebook(written('process.exit(3)', '1'), { keepGoing: true });
    expect(run).toMatchObject({ status: 'failed', cellsRun: 1, failures: [{ ename: 'KernelEnded' }] });
    expect(run.failures[0].evalue).toContain('exit status 3');
  });

  it('stops when asked, and keeps what is done', async () => {
    const controller = new AbortController();
    const running = runNotebook(written('console.log("one")', 'await new Promise(() => {})', '3'), { signal: controller.signal, onProgress: (event) => event.kind === 'cell' && event.cell === 2 && setTimeout(() => controller.abort(), 100) });
    const run = await running;
    expect(run).toMatchObject({ status: 'stopped', cellsRun: 2 });
    expect(run.notebook.cells[0].outputs).toHaveLength(1);
  });

  it('runs two notebooks at once that do not meet', async () => {
    const file = written('(globalThis as any).mine = Math.random();', 'await new Promise((r) => setTimeout(r, 200));\n[(globalThis as any).mine === undefined, Object.keys(globalThis).includes("mine"), process.pid]');
    const [a, b] = await Promise.all([runNotebook(file), runNotebook(file)]);
    const text = (run: typeof a) => JSON.stringify(run.notebook.cells[1].outputs);
    expect(text(a)).toContain('[ false, true,');
    expect(text(a)).not.toBe(text(b));
  });

  it('refuses what it cannot run, in words', async () => {
    await expect(runNotebook(join(folder, 'nowhere.ipynb'))).rejects.toThrow('There is no notebook');
    await expect(runNotebook(threeLavas, { set: { limti: 1 } })).rejects.toThrow('no parameter "limti"');
    await expect(runNotebook(threeLavas, { timeout: -1 })).rejects.toThrow('timeout is a number of seconds above 0');
    await expect(runNotebook('' as never)).rejects.toThrow('takes the path');
    writeFileSync(join(folder, 'no.ipynb'), 'hello');
    await expect(runNotebook(join(folder, 'no.ipynb'))).rejects.toThrow('not valid JSON');
  });
});

describe('the page', () => {
  const output = (data: Record<string, unknown>) => ({ output_type: 'display_data', data, metadata: {} });
  const page = (cells: Notebook['cells']) => notebookHtml({ metadata: {}, cells });
  const evil = '<script>alert(1)</script><img src=x onerror=alert(2)>';

  it('escapes every text and lets no script through', () => {
    const html = page([
      { type: 'markdown', id: 'm', metadata: {}, source: `# A & B\n\n${evil}\n\n[x](javascript:alert(3))`, outputs: [], executionCount: null },
      {
        ...code(`const a = "${evil}";`, [], '"><script>'),
        outputs: [
          { output_type: 'stream', name: 'stdout', text: evil },
          { output_type: 'error', ename: 'E', evalue: evil, traceback: [`\u001b[31m${evil}\u001b[39m`] },
          output({ 'text/html': `<table border="1" onclick="x()"><tr><td style="x">kept ${evil}</td></tr></table><a href="javascript:alert(4)">go</a><style>*{}</style>` }),
          output({ 'text/markdown': `**kept** ${evil}` }),
          output({ 'text/plain': evil }),
          output({ 'image/png': '"><script>alert(5)</script>', 'text/plain': 'odd' }),
        ],
      },
    ]);
    expect(html).not.toMatch(/<script|onerror=alert\(2\)>|<img src=x|onclick|javascript:alert\(4\)|href="javascript|<style>\*/);
    expect(html).toContain('kept');
    expect(html).toContain('<title>A &amp; B</title>');
    expect(html).not.toContain('\u001b');
  });

  it('holds the pictures with their words, at the size the output says', () => {
    const png = Buffer.alloc(24);
    png.write('\x89PNG', 0, 'latin1');
    png.writeUInt32BE(900, 16);
    const base64 = png.toString('base64');
    const shown = { output_type: 'display_data', data: { 'image/png': base64, 'application/vnd.vegalite.v5+json': {}, 'text/plain': 'A "TAS" diagram' }, metadata: { 'image/png': { width: 450 } } };
    const html = page([{ ...code('1'), outputs: [shown] }]);
    expect(html).toContain(`<figure><img src="data:image/png;base64,${base64}" alt="A &quot;TAS&quot; diagram" width="450"></figure>`);
    expect(html).not.toMatch(/src="(?!data:)|href="http/);
  });

  it('has one top heading whatever the notebook has', () => {
    expect(page([code('1')]).match(/<h1/g)).toHaveLength(1);
    expect(page([{ type: 'markdown', id: 'm', metadata: {}, source: '# Mine', outputs: [], executionCount: null }]).match(/<h1/g)).toHaveLength(1);
  });
});

describe('the command line', () => {
  const wedgework = (args: string[], cwd = folder) =>
    new Promise<{ status: number; stdout: string; stderr: string }>((resolve) =>
      execFile(process.execPath, [join(built, 'kernel/cli.js'), ...args], { cwd }, (error, stdout, stderr) => resolve({ status: error === null ? 0 : Number(error.code), stdout, stderr })),
    );

  it('runs a notebook, writes beside the caller, prints the summary', async () => {
    const { status, stdout, stderr } = await wedgework(['run', threeLavas, '--set', 'limit=50', '-s', 'label=front', '--html']);
    expect(status).toBe(0);
    expect(stdout).toMatch(/Rows read {8}3\n {2}Above the limit {2}2\n/);
    expect(stderr).toContain('Analyses');
    expect(existsSync(join(folder, 'three-lavas.executed.ipynb')) && existsSync(join(folder, 'three-lavas.executed.html'))).toBe(true);
  });

  it('has an exit status for every end', async () => {
    const results = await Promise.all([
      wedgework(['run', join(notebooks, 'failing.ipynb'), '-o', 'f.ipynb', '-q']),
      wedgework(['run', 'nowhere.ipynb']),
      wedgework(['run', threeLavas, '--set', 'nope=1']),
      wedgework(['fly']),
      wedgework(['--version']),
      wedgework(['--help']),
      wedgework(['start', 'nowhere.xlsx']),
    ]);
    expect(results.map(({ status }) => status)).toEqual([1, 2, 2, 2, 0, 0, 2]);
    expect(results[0].stderr).toContain("throw new RangeError('no <such> column');");
    expect(results[1].stderr).toContain('There is no notebook nowhere.ipynb');
    expect(results[4].stdout.trim()).toMatch(/^\d+\.\d+\.\d+$/);
    expect(results[5].stdout).toMatch(/start.*\n[^]*run.*\n[^]*kernel/);
  });

  it('installs, lists and removes the kernel without Python', async () => {
    const prefix = join(folder, 'prefix');
    const file = join(prefix, 'share/jupyter/kernels/wedgework/kernel.json');
    expect((await wedgework(['kernel', 'install', '--prefix', prefix])).status).toBe(0);
    const spec = JSON.parse(readFileSync(file, 'utf8')) as { argv: string[]; language: string };
    expect(spec.argv.slice(2)).toEqual(['kernel', 'start', '--connection-file', '{connection_file}']);
    expect(existsSync(spec.argv[0]) && existsSync(spec.argv[1])).toBe(true);
    expect(spec.language).toBe('typescript');
    expect(readdirSync(join(prefix, 'share/jupyter/kernels/wedgework')).sort()).toEqual(['kernel.json', 'logo-32x32.png', 'logo-64x64.png', 'logo-svg.svg']);
    expect((await wedgework(['kernel', 'list', '--prefix', prefix])).stdout).toContain(prefix);
    expect((await wedgework(['kernel', 'remove', '--prefix', prefix])).status).toBe(0);
    expect(existsSync(file)).toBe(false);
    expect((await wedgework(['kernel', 'remove', '--prefix', prefix])).status).toBe(1);
    expect((await wedgework(['kernel', 'install', '--venv', join(folder, 'none')])).stderr).toContain('There is no virtual environment');
  });
});
