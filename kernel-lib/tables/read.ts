import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { basename, join } from 'node:path';
import Papa from 'papaparse';
import { z } from 'zod';
import { referenceFolder } from './locate';
import { standings } from './standing';

/** A fault in a reference table. The message names the file, the line or key, and what is allowed there. */
export class ReferenceTableError extends Error {
  override readonly name = 'ReferenceTableError';
}

/** @internal Building blocks for the schema of one row. */
export const field = {
  text: z.string().trim().min(1),
  optionalText: z.string().trim(),
  number: z.string().trim().regex(/^[-+]?(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?$/, 'must be a number').transform(Number),
  optionalNumber: z.string().trim().regex(/^([-+]?(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?)?$/, 'must be a number or empty').transform((text) => (text === '' ? undefined : Number(text))),
  standing: z.enum(standings),
};

// On the global object, because the library that a notebook imports need not be the copy that its kernel was started from.
const key = Symbol.for('wedgework.tables');
const shared = globalThis as { [key]?: Map<string, string> };
const versions = (shared[key] ??= new Map<string, string>());

/** SHA-256 of every reference file read so far, by its path inside reference-tables/. Part of a run's record. */
export function referenceVersions(): ReadonlyMap<string, string> {
  return versions;
}

function readText(file: string, absolute: boolean): string {
  const text = readFileSync(absolute ? file : join(referenceFolder(), file), 'utf8');
  versions.set(absolute ? basename(file) : file, createHash('sha256').update(text.replaceAll('\r\n', '\n')).digest('hex'));
  return text;
}

const explain = (error: z.ZodError): string => error.issues.map((issue) => `${issue.path.join('.') || 'row'}: ${issue.message}`).join('; ');

/**
 * @internal Reads a CSV table and validates every row.
 *
 * @param file path inside reference-tables/ (or an absolute path with `absolute`)
 * @param row schema of one row, all cells as text on the way in
 * @throws ReferenceTableError naming file and line for a bad cell, an unknown or missing column
 */
export function readCsvTable<Row>(file: string, row: z.ZodType<Row>, options: { absolute?: boolean } = {}): Row[] {
  const parsed = Papa.parse<string[]>(readText(file, options.absolute === true), { skipEmptyLines: 'greedy' });
  const [heads, ...lines] = parsed.data;
  if (heads === undefined) throw new ReferenceTableError(`${file}: the table is empty.`);
  return lines.map((cells, i) => {
    if (cells.length !== heads.length) {
      throw new ReferenceTableError(`${file}, line ${i + 2}: ${cells.length} cells under ${heads.length} column heads (${heads.join(', ')}).`);
    }
    const result = row.safeParse(Object.fromEntries(heads.map((head, j) => [head.trim(), cells[j]])));
    if (!result.success) throw new ReferenceTableError(`${file}, line ${i + 2}: ${explain(result.error)}.`);
    return result.data;
  });
}

/** @internal Reads a JSON table and validates it as a whole. Errors name the file and the key. */
export function readJsonTable<Content>(file: string, schema: z.ZodType<Content>, options: { absolute?: boolean } = {}): Content {
  let content: unknown;
  try {
    content = JSON.parse(readText(file, options.absolute === true));
  } catch (error) {
    if (error instanceof SyntaxError) throw new ReferenceTableError(`${file}: not valid JSON (${error.message}).`);
    throw error;
  }
  const result = schema.safeParse(content);
  if (!result.success) throw new ReferenceTableError(`${file}: ${explain(result.error)}.`);
  return result.data;
}

/** @internal A value that is made once, when first asked for. */
export function once<Value>(make: () => Value): () => Value {
  let made: { value: Value } | undefined;
  return () => (made ??= { value: make() }).value;
}
