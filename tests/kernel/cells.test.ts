import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startEngine } from './engine';

const folder = mkdtempSync(join(tmpdir(), 'wedgework-cells-'));
// A folder outside the repository, with no node_modules above it.
const { engine, run, runAndInterrupt } = startEngine({ folder });
beforeAll(async () => {
  expect((await engine.ready).warning).toBeUndefined();
});
afterAll(async () => {
  await engine.end();
  rmSync(folder, { recursive: true });
});

describe('the value of a cell', () => {
  it('shows the library loaded as ww, and the same library by import', async () => {
    const { reply, text } = await run("import * as lib from 'wedgework';\nlib.suiteOf === ww.suiteOf");
    expect(reply.status).toBe('ok');
    expect(text).toBe('true');
  });

  it('is typed: a wrong option is a fault of the compiler', async () => {
    const { reply } = await run("ww.withMagnesiumNumber(ww.suiteOf({ columns: [] }), { iron: 'none' })");
    expect(reply).toMatchObject({ status: 'error', ename: 'CompileError' });
    expect(reply.evalue).toContain('"total" | "measured"');
  });

  it('shows a suite as table, Markdown and text, every text escaped', async () => {
    const { shown } = await run("ww.suiteOf({ columns: [ww.column({ symbol: 'SiO2', values: [52.1] })], labels: { sample: ['<img src=x>'] } })");
    expect(shown).toHaveLength(1);
    expect(shown[0].kind).toBe('result');
    expect(Object.keys(shown[0].data)).toEqual(['text/html', 'text/markdown', 'text/plain']);
    expect(shown[0].data['text/html']).toContain('&lt;img src=x&gt;');
    expect(shown[0].data['text/html']).not.toContain('<img');
  });

  it('waits for a promise, and for a bundle that comes as a promise', async () => {
    expect((await run('new Promise((resolve) => setTimeout(() => resolve(7), 20))')).text).toBe('7');
    const { shown } = await run("({ toMimeBundle: async () => ({ 'text/plain': 'late', 'image/png': new Uint8Array([1, 2]) }) })");
    expect(shown[0].data).toEqual({ 'text/plain': 'late', 'image/png': 'AQI=' });
  });

  it('shows nothing for undefined, and each of a list of showable values', async () => {
    expect((await run('undefined')).shown).toEqual([]);
    expect((await run('Promise.resolve(undefined)')).shown).toEqual([]);
    expect((await run('[ww.runSummary({ a: 1 }), ww.runSummary({ b: 2 })]')).shown.map(({ kind }) => kind)).toEqual(['display', 'display']);
  });

  it('shows a data frame by its shape, cut with a count', async () => {
    const { shown } = await run(
      "import * as dfd from 'danfojs-node';\nnew dfd.DataFrame(Array.from({ length: 200 }, (_, i) => [i, `<b>${i}`]), { columns: ['n', 'name'] })",
    );
    expect(shown[0].data['text/html']).toContain('&lt;b&gt;3');
    expect(shown[0].data['text/plain']).toContain('60 of 200 rows shown.');
    expect((await run('new dfd.Series([1, 2, 3])')).shown[0].data['text/html']).toContain('<table');
  });

  it('shows what ww.show and tslab.display are given', async () => {
    const { shown } = await run("import * as tslab from 'tslab';\nawait ww.show({ a: 1 });\ntslab.display.html('<b>x</b>');\nawait ww.show(undefined);");
    expect(shown.map(({ kind, data }) => [kind, Object.keys(data)])).toEqual([['display', ['text/plain']], ['display', ['text/html']]]);
  });

  it('takes names of earlier cells in the short form of an object, too', async () => {
    await run('const group = "volcano"; let most = 3;');
    expect((await run('const options = { group, most, more: [{ group }] };\nJSON.stringify(options)')).text).toBe(`'{"group":"volcano","most":3,"more":[{"group":"volcano"}]}'`);
    expect((await run('({ most } = { most: 8 });\nmost')).text).toBe('8');
    const { reply } = await run('const bad = { group, most }; bad.nothing');
    expect(reply.traceback![1]).toContain('column 34');
  });

  it('compiles modules beside the notebook', async () => {
    writeFileSync(join(folder, 'helper.ts'), 'export const twice = (n: number): number => 2 * n;\n');
    expect((await run("import { twice } from './helper';\ntwice(21)")).text).toBe('42');
  });
});

describe('an error', () => {
  it('has name, message and the lines of the user, through types that the compiler took out', async () => {
    const { reply, outputs } = await run(
      ['interface Shape { a: number }', '', 'type B = Shape;', 'function inner(x: B): number {', '  // a comment', '  return (null as any).foo;', '}', 'inner({ a: 1 })'].join('\n'),
    );
    expect(reply).toMatchObject({ status: 'error', ename: 'TypeError' });
    expect(reply.traceback).toEqual([
      "\u001b[31mTypeError\u001b[39m: Cannot read properties of null (reading 'foo')",
      expect.stringMatching(/line 6 in inner: {2}return \(null as any\)\.foo;$/),
      expect.stringMatching(/line 8: {2}inner\(\{ a: 1 \}\)$/),
    ]);
    expect(outputs.at(-1)).toMatchObject({ kind: 'error', ename: 'TypeError' });
  });

  it('points into an earlier cell that defined the function', async () => {
    await run('const ask = (name: string) => {\n  return ww.suiteOf({ columns: [] }).column(name);\n};');
    const { reply } = await run('const before = 1;\nask("Xy")');
    expect(reply.ename).toBe('RangeError');
    expect(reply.traceback!.slice(1)).toEqual([expect.stringMatching(/line 2.*column\(name\)/), expect.stringMatching(/line 2: {2}ask\("Xy"\)/)]);
  });

  it('keeps its place after an await', async () => {
    const { reply } = await run('await Promise.resolve();\n\n\nawait Promise.reject(new Error("late"));');
    expect(reply.traceback![1]).toMatch(/line 4/);
  });

  it('tells causes, plain values and faults of the compiler', async () => {
    expect((await run('throw new Error("outer", { cause: new TypeError("inner") })')).reply.traceback).toContain('Caused by TypeError: inner');
    expect((await run('throw "plain"')).reply).toMatchObject({ ename: 'ThrownValue', evalue: 'plain' });
    const { reply } = await run('const one = 1;\nconst two: number = "2";');
    expect(reply).toMatchObject({ ename: 'CompileError', evalue: "Type 'string' is not assignable to type 'number'." });
    expect(reply.traceback!.slice(1)).toEqual([expect.stringMatching(/line 2, column 7/), '      const two: number = "2";']);
  });

  it('in a timer is printed and ends nothing', async () => {
    const { stderr, reply } = await run('setTimeout(() => { throw new Error("stray") }, 5);\nawait new Promise((resolve) => setTimeout(resolve, 60));');
    expect(reply.status).toBe('ok');
    expect(stderr).toContain('stray');
  });
});

describe('what a cell prints', () => {
  it('comes as it was printed, both streams in order', async () => {
    const { outputs } = await run('console.log("a"); console.log("b"); console.error("c"); console.log("d");');
    expect(outputs).toEqual([
      { kind: 'stream', name: 'stdout', text: 'a\nb\n' },
      { kind: 'stream', name: 'stderr', text: 'c\n' },
      { kind: 'stream', name: 'stdout', text: 'd\n' },
    ]);
  });

  it('is cut with a clear message past a million characters', async () => {
    const { stdout, stderr } = await run("for (let i = 0; i < 3000; i++) console.log('x'.repeat(999));");
    expect(stdout).toHaveLength(1_000_000);
    expect(stderr).toContain('Output cut: 2,000,000 more characters');
  });

  it('is kept from programs that a cell starts, too', async () => {
    const { stdout } = await run("import { execFileSync } from 'node:child_process';\nexecFileSync(process.execPath, ['-e', 'console.log(42)'], { stdio: 'inherit' });\nawait new Promise((resolve) => setTimeout(resolve, 100));");
    expect(stdout).toContain('42');
  });

  it('keeps the first of too many things shown, and says so', async () => {
    const { shown, stderr } = await run('for (let i = 0; i < 400; i++) await ww.show(i);');
    expect(shown).toHaveLength(300);
    expect(stderr).toContain('this cell showed 400 things');
  });
});

describe('size', () => {
  it('a cell of a megabyte runs', async () => {
    const { text } = await run(`const long = ${JSON.stringify('x'.repeat(1_000_000))};\nlong.length`);
    expect(text).toBe('1000000');
  });

  it('a frame of 10,000 columns shows its first', async () => {
    const { shown } = await run('new dfd.DataFrame([Array.from({ length: 10000 }, (_, i) => i)])');
    expect(shown[0].data['text/plain']).toContain('40 of 10001 columns shown.');
    expect(JSON.stringify(shown[0].data).length).toBeLessThan(100_000);
  });

  it('an output too large for a notebook is left out with a message', async () => {
    const { shown } = await run("({ toMimeBundle: () => ({ 'text/html': 'x'.repeat(9_000_000), 'text/plain': 'short' }) })");
    expect(shown[0].data).toEqual({ 'text/plain': 'short\nNot shown, too large for a notebook: text/html (9 MB). Show fewer samples, or save it to a file.' });
  });
});

describe('an interrupt', () => {
  // Code that runs on after an await is outside every door but the debugger's; a loop of awaits never comes back to the event loop.
  it.each([
    'while (true) {}',
    'await null; while (true) {}',
    'await new Promise((resolve) => setTimeout(resolve, 10)); while (true) {}',
    'while (true) await null;',
    'await new Promise(() => {})',
    'new Promise(() => {})',
    'setTimeout(() => { while (true) {} }, 5); await new Promise(() => {})',
    'while (true) { try { for (;;) {} } catch {} }',
  ])('stops %s within a second and leaves the variables', async (loop) => {
    await run('const kept = 41;');
    const { reply, stopped } = await runAndInterrupt(loop, 250);
    expect(reply).toMatchObject({ status: 'error', ename: 'Interrupted', interrupted: true });
    expect(stopped).toBeLessThan(1000);
    expect((await run('await new Promise((resolve) => setTimeout(resolve, 5));\nkept + 1')).text).toBe('42');
  });

  it('that comes before the cell is compiled stops it all the same', async () => {
    for (const after of [0, 1, 5, 20]) {
      const { reply } = await runAndInterrupt('while (true) {}', after);
      expect(reply.interrupted).toBe(true);
    }
    expect((await run('kept')).text).toBe('41');
  });

  it('reaches work that watches the signal', async () => {
    const { reply, outputs } = await runAndInterrupt(
      "const { signal } = ww.progress('Waiting');\nsignal.addEventListener('abort', () => console.log('told'));\nawait new Promise(() => {})",
      250,
    );
    expect(reply.interrupted).toBe(true);
    expect(JSON.stringify(outputs)).toContain('told');
  });

  it('does nothing between cells', async () => {
    engine.interrupt();
    await new Promise((resolve) => setTimeout(resolve, 600));
    expect((await run('kept')).text).toBe('41');
  });
});

describe('the keyboard', () => {
  it('is refused with a reason', async () => {
    expect((await run("process.stdin.on('data', () => {})")).reply.evalue).toMatch(/cannot ask for keyboard input/);
  });
});

describe('editors', () => {
  it('complete names and option values with their kinds', async () => {
    const names = await engine.complete({ code: 'ww.molarM', cursor: 9 });
    expect(names).toMatchObject({ start: 3, end: 9, matches: [{ text: 'molarMass', kind: 'function' }] });
    const values = await engine.complete({ code: "ww.withMagnesiumNumber(ww.suiteOf({ columns: [] }), { iron: '' })", cursor: 61 });
    expect(values.matches.map(({ text }) => text)).toEqual(expect.arrayContaining(['total', 'measured']));
  });

  it('show our doc comments, inside the brackets of a call too', async () => {
    for (const [code, cursor] of [['ww.molarMass', 6], ["ww.molarMass('SiO2', ", 20]] as const) {
      const { found } = await engine.inspect({ code, cursor });
      expect(found?.signature).toContain('molarMass(symbol: string): number');
      expect(found?.documentation).toMatch(/^Molar mass/);
      expect(found?.tags.map(({ name }) => name)).toEqual(expect.arrayContaining(['param', 'returns', 'throws', 'example']));
    }
    expect((await engine.inspect({ code: '1 + 1', cursor: 2 })).found).toBeNull();
  });

  it('are told whether a cell is complete', async () => {
    expect(await engine.isComplete({ code: 'function f() {' })).toEqual({ complete: false, indent: '  ' });
    expect((await engine.isComplete({ code: 'f()' })).complete).toBe(true);
  });
});
