import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll } from 'vitest';
import { cellState, readAssays, type Assays, type ReadAssaysOptions, type Suite } from 'wedgework';

/** The same cases on every run and machine; change it to look for new ones. */
fc.configureGlobal({ seed: 20_311 });

const folder = mkdtempSync(join(tmpdir(), 'assay-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));
let count = 0;

/** A path in a folder that is removed when the tests of a file are done. */
export function temporary(name: string): string {
  return join(folder, `${++count}-${name}`);
}

/** Reads a sheet given as text or bytes. */
export async function readText(content: string | Uint8Array, name = 'sheet.csv', options: ReadAssaysOptions = {}): Promise<Assays> {
  const path = temporary(name);
  writeFileSync(path, content);
  return readAssays(path, options);
}

/** A column as cells one can read: the number, `<limit`, `>limit`, '' for missing. */
export function cells(suite: Suite, symbol: string): (number | string)[] {
  const { values, states, limits } = suite.column(symbol);
  return Array.from(values, (value, i) => {
    const limit = limits?.[i] ?? NaN;
    if (states[i] === cellState.belowDetection) return `<${Number.isNaN(limit) ? '' : limit}`;
    if (states[i] === cellState.aboveRange) return `>${Number.isNaN(limit) ? '' : limit}`;
    return states[i] === cellState.missing ? '' : value;
  });
}
