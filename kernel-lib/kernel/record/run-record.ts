import { existsSync, readFileSync } from 'node:fs';
import { dirname, join, relative, resolve } from 'node:path';
import { z } from 'zod';
import { sheetGrids } from '../../assay';
import type { Step } from '../../suite';
import { referenceFolder } from '../../tables';
import type { Notebook } from '../notebook/document';
import type { ParameterValue } from '../notebook/parameters';
import { lineDigests, sheetDigests, type SheetDigests } from './file-digests';
import { outputData, outputParts, sha256 } from './output-data';
import type { RunFacts } from './run-facts';

/** A run record that cannot be used. The message says what is wrong and what to do. */
export class RunRecordError extends Error {
  override readonly name = 'RunRecordError';
}

const format = 'wedgework run record';
const formatVersion = 1;

const digest = z.string().regex(/^[0-9a-f]{64}$/);
const recordSchema = z.object({
  format: z.literal(format),
  version: z.literal(formatVersion),
  notebook: z.object({ file: z.string(), folder: z.string() }),
  executed: z.string(),
  parameters: z.record(z.string(), z.unknown()),
  keepGoing: z.boolean(),
  status: z.string(),
  environment: z.object({ wedgework: z.string(), node: z.string(), platform: z.string(), packages: z.record(z.string(), z.string()) }),
  inputs: z.array(
    z.object({
      file: z.string(),
      sha256: digest,
      bytes: z.number(),
      sheets: z.array(z.object({ sheet: z.string(), heads: z.array(z.string()), rows: z.string(), columns: z.string() })).optional(),
      lines: z.string().optional(),
    }),
  ),
  tables: z.array(z.object({ table: z.string(), sha256: digest, lines: z.string() })),
  cells: z.array(z.object({ id: z.string(), source: digest, outputs: z.array(z.object({ kind: z.string(), sha256: digest, parts: z.number() })) })),
  lineage: z.array(z.unknown()),
});

/** The small file beside an executed notebook that says what the run used and what it gave. Holds no time, no user and no absolute path. */
export interface RunRecord {
  readonly format: typeof format;
  readonly version: typeof formatVersion;
  /** The notebook as it was before the run, and the folder its cells ran in; both relative to the record. */
  readonly notebook: { readonly file: string; readonly folder: string };
  /** The executed notebook, beside the record. */
  readonly executed: string;
  readonly parameters: Readonly<Record<string, ParameterValue>>;
  /** Whether cells after a failed one were run too. */
  readonly keepGoing: boolean;
  readonly status: string;
  readonly environment: RunFacts['versions'];
  readonly inputs: readonly RecordedInput[];
  readonly tables: readonly { readonly table: string; readonly sha256: string; readonly lines: string }[];
  readonly cells: readonly RecordedCell[];
  /** The steps behind everything shown. */
  readonly lineage: readonly Step[];
}

/** An input file, relative to the record; sheets and text files are recorded so that a change can be placed. */
export interface RecordedInput {
  readonly file: string;
  readonly sha256: string;
  readonly bytes: number;
  readonly sheets?: readonly SheetDigests[];
  readonly lines?: string;
}

/** A cell and what it gave: each output's data hashed (pictures left out, since the data behind them are in), and how many values it holds. */
export interface RecordedCell {
  readonly id: string;
  readonly source: string;
  readonly outputs: readonly { readonly kind: string; readonly sha256: string; readonly parts: number }[];
}

const slashes = (path: string): string => path.replaceAll('\\', '/');

/** Where the record of an executed notebook stands. */
export const recordPath = (executed: string): string => `${executed.replace(/\.ipynb$/, '')}.record.json`;

/** What a run needs to say for its record. */
export interface RecordedRun {
  /** Absolute paths: of the notebook that was run, the folder of its cells, the executed notebook. */
  readonly source: string;
  readonly folder: string;
  readonly executed: string;
  readonly parameters: Readonly<Record<string, ParameterValue>>;
  readonly keepGoing: boolean;
  readonly status: string;
  readonly notebook: Notebook;
  readonly facts: RunFacts;
}

/** Makes the record of a run, reading its inputs again to place their cells. */
export async function makeRecord(run: RecordedRun): Promise<RunRecord> {
  const home = dirname(recordPath(run.executed));
  const here = (path: string) => slashes(relative(home, path)) || '.';
  return {
    format,
    version: formatVersion,
    notebook: { file: here(run.source), folder: here(run.folder) },
    executed: here(run.executed),
    parameters: run.parameters,
    keepGoing: run.keepGoing,
    status: run.status,
    environment: run.facts.versions,
    inputs: await Promise.all(run.facts.inputs.map(async ({ path, sha256: hash, bytes }) => ({ file: here(path), sha256: hash, bytes, ...(await contentDigests(path)) }))),
    tables: Object.entries(run.facts.tables).map(([table, hash]) => ({ table, sha256: hash, lines: tableLines(table) })),
    cells: recordedCells(run.notebook),
    lineage: run.facts.lineage,
  };
}

export function recordedCells(notebook: Notebook): readonly RecordedCell[] {
  return notebook.cells
    .filter((cell) => cell.type === 'code' && cell.source.trim() !== '')
    .map((cell) => ({
      id: cell.id,
      source: sha256(cell.source),
      outputs: cell.outputs.flatMap((output) => {
        const data = outputData(output);
        return data === undefined ? [] : [{ kind: data.kind, sha256: sha256(data.content), parts: outputParts(data).length }];
      }),
    }));
}

const largestPlaced = 5_000_000;

/** Digests of a file's cells or lines; nothing for a file of another kind or size. */
export async function contentDigests(path: string): Promise<{ sheets?: readonly SheetDigests[]; lines?: string }> {
  try {
    const sheets = (await sheetGrids(path)).map(sheetDigests).filter((each) => each !== undefined);
    if (sheets.length > 0) return { sheets };
  } catch {
    // Not a sheet: a text file is recorded by line.
  }
  try {
    const text = readFileSync(path);
    return text.byteLength <= largestPlaced && !text.includes(0) ? { lines: lineDigests(path) } : {};
  } catch {
    return {};
  }
}

/** Tables of the library's own are small, so every line is recorded; a user's own scheme stands among the inputs. */
function tableLines(table: string): string {
  const path = join(referenceFolder(), table);
  return existsSync(path) ? lineDigests(path) : '';
}

/**
 * Reads the record beside an executed notebook.
 *
 * @param path of the executed notebook, or of its record
 * @throws RunRecordError for a record that is missing or no record
 */
export function readRecord(path: string): { readonly record: RunRecord; readonly at: string } {
  const at = resolve(path.endsWith('.record.json') ? path : recordPath(path));
  let text: string;
  try {
    text = readFileSync(at, 'utf8');
  } catch {
    throw new RunRecordError(`There is no run record ${slashes(relative(process.cwd(), at))}. A run writes one beside its executed notebook: "wedgework run notebook.ipynb --out results/notebook.ipynb".`);
  }
  let content: unknown;
  try {
    content = JSON.parse(text);
  } catch (error) {
    throw new RunRecordError(`${path}: the run record is damaged (${(error as Error).message}). Run the notebook again to make a new one.`);
  }
  const checked = recordSchema.safeParse(content);
  if (!checked.success) {
    const [fault] = checked.error.issues;
    throw new RunRecordError(`${path}: not a run record that this version reads (${fault.path.join('.') || 'the file'}: ${fault.message}). Run the notebook again to make a new one.`);
  }
  return { record: checked.data as unknown as RunRecord, at };
}

/** The record as the text of a file. The same run gives the same bytes. */
export const formatRecord = (record: RunRecord): string => `${JSON.stringify(record, null, 1)}\n`;
