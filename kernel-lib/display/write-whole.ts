import { createHash, randomBytes } from 'node:crypto';
import { mkdirSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { basename, dirname, join, resolve } from 'node:path';

// On the global object, because the library that a notebook imports need not be the copy that its kernel was started from.
const key = Symbol.for('wedgework.scratch-folder');
const shared = globalThis as { [key]?: string };

/** @internal From now on this process writes its files into this folder, whatever path is asked for: a trial run must not touch results. */
export function writeInto(folder: string): void {
  shared[key] = folder;
}

/** @internal Where a file that is to be written at a path really goes: there, or below the scratch folder of a trial run. */
export function writtenPath(path: string): string {
  const scratch = shared[key];
  return scratch === undefined ? path : join(scratch, createHash('sha256').update(dirname(resolve(path))).digest('hex').slice(0, 8), basename(path));
}

/** @internal Writes a file whole or not at all: under a temporary name first, so that its final name never holds half of it. */
export function writeWhole(asked: string, content: string | Uint8Array): void {
  const path = writtenPath(asked);
  mkdirSync(dirname(path), { recursive: true });
  const temporary = join(dirname(path), `.${basename(path)}.${randomBytes(4).toString('hex')}.part`);
  try {
    writeFileSync(temporary, content);
    renameSync(temporary, path);
  } catch (error) {
    rmSync(temporary, { force: true });
    throw error;
  }
}
