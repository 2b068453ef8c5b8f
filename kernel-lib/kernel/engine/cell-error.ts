import { inspect } from 'node:util';
import type { ErrorOutput } from '../output';
import { lineMap } from './cell-lines';
import type { CompilerFault } from './tslab-contract';

/** A cell that was compiled: what stack frames of its script point into. */
export interface CompiledCell {
  /** How messages call it: `cell [3]`. */
  readonly label: string;
  readonly source: string;
  readonly output: string;
}

/** Script names of cells in stack frames. */
export const scriptName = (number: number): string => `wedgework-cell-${number}`;
const framePattern = /(?:at (?:async )?(.*?) \()?wedgework-cell-(\d+):(\d+):(\d+)/;

const mostFrames = 8;
const longestExcerpt = 160;
const red = (text: string): string => `\u001b[31m${text}\u001b[39m`;

const excerpt = (source: string, line: number): string => {
  const text = (source.split('\n')[line - 1] ?? '').trim();
  return text.length > longestExcerpt ? `${text.slice(0, longestExcerpt)}…` : text;
};

/** What the compiler found wrong with a cell, as one error output. */
export function compilerError(label: string, source: string, faults: readonly CompilerFault[]): ErrorOutput {
  const [first] = faults;
  const lines = faults.slice(0, mostFrames).flatMap(({ line, column, message }) => [
    `  ${label}, line ${line}, column ${column}: ${message}`,
    ...(excerpt(source, line) === '' ? [] : [`      ${excerpt(source, line)}`]),
  ]);
  if (faults.length > mostFrames) lines.push(`  … and ${faults.length - mostFrames} more.`);
  const evalue = faults.length === 1 ? first.message : `${first.message} (and ${faults.length - 1} more)`;
  return { kind: 'error', ename: 'CompileError', evalue, traceback: [`${red('CompileError')}: the cell was not run.`, ...lines] };
}

/** Whatever a cell threw, as an error output with a short traceback in the user's own cell lines. */
export function thrownError(error: unknown, cells: ReadonlyMap<number, CompiledCell>): ErrorOutput {
  if (!(error instanceof Error) && !isErrorLike(error)) {
    const text = typeof error === 'string' ? error : inspect(error, { depth: 2, maxArrayLength: 20, maxStringLength: 2_000 });
    return { kind: 'error', ename: 'ThrownValue', evalue: text, traceback: [`${red('ThrownValue')}: ${text}`] };
  }
  const { name, message } = error;
  const traceback = [`${red(name)}: ${message}`, ...frames(error, cells)];
  const seen = new Set<unknown>([error]);
  for (let cause: unknown = error.cause; cause !== undefined && !seen.has(cause); cause = isErrorLike(cause) ? cause.cause : undefined) {
    seen.add(cause);
    traceback.push(isErrorLike(cause) ? `Caused by ${cause.name}: ${cause.message}` : `Caused by: ${inspect(cause, { depth: 1 })}`);
    if (isErrorLike(cause)) traceback.push(...frames(cause, cells));
  }
  return { kind: 'error', ename: name, evalue: message, traceback };
}

/** Errors made in another realm are no instance of this one's Error. */
function isErrorLike(value: unknown): value is Error {
  return typeof value === 'object' && value !== null && typeof (value as Error).message === 'string' && typeof (value as Error).name === 'string';
}

function frames(error: Error, cells: ReadonlyMap<number, CompiledCell>): string[] {
  // The stack repeats the message, which may itself look like frames.
  const stack = String(error.stack ?? '');
  const body = stack.includes(error.message) ? stack.slice(stack.indexOf(error.message) + error.message.length) : stack;
  const maps = new Map<CompiledCell, ReturnType<typeof lineMap>>();
  const found: string[] = [];
  for (const text of body.split('\n')) {
    const match = framePattern.exec(text);
    const cell = match === null ? undefined : cells.get(Number(match[2]));
    if (match === null || cell === undefined) continue;
    if (!maps.has(cell)) maps.set(cell, lineMap(cell.source, cell.output));
    const line = maps.get(cell)!(Number(match[3]), Number(match[4]));
    // The last frame of a cell is the wrapping around it.
    if (line === undefined && found.length > 0) continue;
    const caller = match[1] === undefined || match[1] === '' || match[1].startsWith('eval') ? '' : ` in ${match[1]}`;
    const shown = line === undefined ? `  ${cell.label}${caller}` : `  ${cell.label}, line ${line}${caller}:  ${excerpt(cell.source, line)}`;
    if (found[found.length - 1] !== shown) found.push(shown);
    if (found.length === mostFrames) break;
  }
  if (found.length > 0) return found;
  // Nothing of the user's own: a few frames of what failed are better than none.
  return body.split('\n').map((text) => text.trimEnd()).filter((text) => /^\s+at /.test(text)).slice(0, 3);
}
