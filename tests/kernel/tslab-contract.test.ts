import { createRequire } from 'node:module';
import { describe, expect, it } from 'vitest';

// What engine/tslab-contract.ts relies on in tslab's private modules. If one of these fails after an update of tslab, that file is the
// one to mend.
const load = createRequire(__filename);
const manifest = load('tslab/package.json') as { version: string };
const converterModule = load('tslab/dist/converter') as { createConverter: Function; isCompleteCode: (code: string) => { completed: boolean; indent?: string } };
const executorModule = load('tslab/dist/executor') as { createExecutor: Function };
const jupyterModule = load('tslab/dist/jupyter') as { lastWriteDisplayData: unknown };

const converter = converterModule.createConverter({ isJS: false, isBrowser: false });
const logged: unknown[] = [];
const errors: unknown[][] = [];
const executor = executorModule.createExecutor(process.cwd(), { node: converter, browser: converter, close: () => converter.close() }, {
  log: (value: unknown) => logged.push(value),
  error: (...values: unknown[]) => errors.push(values),
});

describe('the contract with tslab', () => {
  it('is about this version', () => {
    expect(manifest.version).toBe('1.0.22');
    expect((load('@tslab/typescript-for-tslab') as { version: string }).version).toBe('5.0.4');
  });

  it('converts a cell to code that leaves its names and its last value in exports', () => {
    const conversion = converter.convert('', 'const a: number = 1;\na + 1');
    expect(conversion.diagnostics).toEqual([]);
    expect(conversion.output).toMatch(/exports\.a = a/);
    expect(conversion.lastExpressionVar).toBe('tsLastExpr');
    expect(conversion.hasToplevelAwait).toBe(false);
    expect(conversion.declOutput).toContain('declare const a: number');
  });

  it('hands the raw last value to log, and nothing for undefined', async () => {
    logged.length = 0;
    expect(await executor.execute('const list = [1, 2]; list')).toBe(true);
    expect(await executor.execute('undefined')).toBe(true);
    expect(await executor.execute('await Promise.resolve({ late: true })')).toBe(true);
    expect(logged).toEqual([[1, 2], { late: true }]);
  });

  it('hands a thrown value alone to error, and a fault of the compiler as a format with four values', async () => {
    errors.length = 0;
    expect(await executor.execute('throw new RangeError("no")')).toBe(false);
    expect(errors[0]).toHaveLength(1);
    expect((errors[0][0] as Error).message).toBe('no');
    expect(await executor.execute('\nconst b: number = "text";')).toBe(false);
    expect(errors[1].slice(0, 4)).toEqual(['%s%d:%d - %s', '', 2, 7]);
  });

  it('names scripts in stack frames by a sourceURL comment in the converted code', async () => {
    errors.length = 0;
    const { convert } = converter;
    converter.convert = (previous: string, source: string) => {
      const conversion = convert(previous, source);
      conversion.output += '\n//# sourceURL=named-cell';
      return conversion;
    };
    await executor.execute('throw new Error("where")');
    converter.convert = convert;
    expect((errors[0][0] as Error).stack).toMatch(/named-cell:\d+/);
  });

  it('rejects a waiting cell on interrupt', async () => {
    errors.length = 0;
    const waiting = executor.execute('await new Promise(() => {})');
    await new Promise((resolve) => setTimeout(resolve, 200));
    executor.interrupt();
    expect(await waiting).toBe(false);
  });

  it('completes, inspects and judges completeness', () => {
    expect(executor.complete('Math.sqr', 8)).toMatchObject({ start: 5, end: 8, candidates: expect.arrayContaining(['sqrt']) });
    expect(executor.inspect('Math.sqrt', 6).documentation[0].text).toContain('square root');
    expect(converterModule.isCompleteCode('function f() {')).toEqual({ completed: false, indent: '  ' });
    expect(converterModule.isCompleteCode('1').completed).toBe(true);
  });

  it('leaves its require in a global, and its display in a variable that can be set', () => {
    expect(typeof (globalThis as { __tslab__?: { require: unknown } }).__tslab__!.require).toBe('function');
    const write = () => {};
    jupyterModule.lastWriteDisplayData = write;
    expect(jupyterModule.lastWriteDisplayData).toBe(write);
    jupyterModule.lastWriteDisplayData = null;
    executor.close();
  });
});
