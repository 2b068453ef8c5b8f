import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { basename, resolve } from 'node:path';

/** A file that this process has read as input, as it was when it was read. */
export interface InputFile {
  /** Absolute path on this machine; a record that leaves the machine keeps only the name or a relative path. */
  readonly path: string;
  readonly name: string;
  readonly sha256: string;
  readonly bytes: number;
}

// On the global object, because the library that a notebook imports need not be the copy that its kernel was started from.
const key = Symbol.for('wedgework.inputs');
const shared = globalThis as { [key]?: Map<string, InputFile> };
const read = (shared[key] ??= new Map());

/**
 * Notes that a file was read as input, for the record of a run. Every reader of a user's file calls this with the bytes that it used.
 *
 * @param path as the user gave it
 * @param content what was read
 * @param sha256 of the content, where the caller has it already
 */
export function noteInput(path: string, content: Uint8Array, sha256 = createHash('sha256').update(content).digest('hex')): InputFile {
  const absolute = resolve(path);
  const input: InputFile = { path: absolute, name: basename(path), sha256, bytes: content.byteLength };
  read.set(absolute, input);
  return input;
}

/**
 * Reads a user's file whole and notes it as an input.
 *
 * @throws Error naming the file when it is not there or cannot be read
 */
export function readInput(path: string): { readonly content: Buffer; readonly input: InputFile } {
  let content: Buffer;
  try {
    content = readFileSync(path);
  } catch (error) {
    const reason = (error as NodeJS.ErrnoException).code === 'ENOENT' ? 'there is no such file' : (error as Error).message;
    throw new Error(`${path} cannot be read: ${reason}. Paths count from the notebook's own folder.`);
  }
  return { content, input: noteInput(path, content) };
}

/** Every file that this process has read as input, in order. */
export function inputsRead(): readonly InputFile[] {
  return [...read.values()];
}
