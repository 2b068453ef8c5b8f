import { createHash } from 'node:crypto';

/** A cell of a notebook, with its text in one piece. */
export interface NotebookCell {
  readonly type: 'code' | 'markdown' | 'raw';
  /** Stable name of the cell inside its notebook. */
  readonly id: string;
  readonly metadata: Readonly<Record<string, unknown>>;
  readonly source: string;
  /** Outputs in the notebook file's own form; code cells only. */
  readonly outputs: readonly NotebookOutput[];
  readonly executionCount: number | null;
  readonly attachments?: unknown;
}

export interface NotebookOutput {
  readonly output_type: string;
  readonly [field: string]: unknown;
}

/** A notebook: format 4.5, the open standard of Jupyter. */
export interface Notebook {
  readonly cells: readonly NotebookCell[];
  readonly metadata: Readonly<Record<string, unknown>>;
}

/** A file that is not a notebook that can be read. The message says what is wrong and what to do. */
export class NotebookFormatError extends Error {
  override readonly name = 'NotebookFormatError';
}

/**
 * Reads the text of a notebook file of any format 4.x. Cells of older files, which have no ids, get stable ones made from their text.
 *
 * @param text content of the file
 * @param file its name, for messages
 * @throws NotebookFormatError
 */
export function parseNotebook(text: string, file: string): Notebook {
  let content: Record<string, unknown>;
  try {
    content = JSON.parse(text) as Record<string, unknown>;
  } catch (error) {
    throw new NotebookFormatError(`${file} is not a notebook: it is not valid JSON (${(error as Error).message}).`);
  }
  if (typeof content !== 'object' || content === null || !Array.isArray(content.cells)) {
    throw new NotebookFormatError(`${file} is not a notebook of format 4: it has no list of cells. Open and save it in a current Jupyter front end.`);
  }
  if (content.nbformat !== 4) {
    throw new NotebookFormatError(`${file} is a notebook of format ${String(content.nbformat)}; this needs format 4. Open and save it in a current Jupyter front end.`);
  }
  const taken = new Set<string>();
  const cells = content.cells.map((cell: unknown, i) => parseCell(cell, `${file}, cell ${i + 1}`, taken));
  return { cells, metadata: (content.metadata as Record<string, unknown> | undefined) ?? {} };
}

const idPattern = /^[a-zA-Z0-9_-]{1,64}$/;

function parseCell(raw: unknown, place: string, taken: Set<string>): NotebookCell {
  if (typeof raw !== 'object' || raw === null) throw new NotebookFormatError(`${place}: a cell must be an object.`);
  const cell = raw as Record<string, unknown>;
  const type = cell.cell_type;
  if (type !== 'code' && type !== 'markdown' && type !== 'raw') {
    throw new NotebookFormatError(`${place}: cell_type is "${String(type)}"; it must be "code", "markdown" or "raw".`);
  }
  const source = joined(cell.source);
  if (source === undefined) throw new NotebookFormatError(`${place}: source must be text or a list of lines.`);
  let id = typeof cell.id === 'string' && idPattern.test(cell.id) ? cell.id : textId(type, source);
  for (let n = 2; taken.has(id); n++) id = `${textId(type, source)}-${n}`;
  taken.add(id);
  return {
    type,
    id,
    metadata: (cell.metadata as Record<string, unknown> | undefined) ?? {},
    source,
    outputs: type === 'code' && Array.isArray(cell.outputs) ? (cell.outputs as NotebookOutput[]) : [],
    executionCount: typeof cell.execution_count === 'number' ? cell.execution_count : null,
    ...(cell.attachments !== undefined && { attachments: cell.attachments }),
  };
}

const textId = (type: string, source: string): string => createHash('sha256').update(`${type}\n${source}`).digest('hex').slice(0, 12);

function joined(text: unknown): string | undefined {
  if (typeof text === 'string') return text;
  return Array.isArray(text) && text.every((line) => typeof line === 'string') ? text.join('') : undefined;
}

/** Text as notebook files keep it: a list of lines, each with its line end. */
const lines = (text: string): string[] => text.match(/[^\n]*\n|[^\n]+$/g) ?? [];

/** The notebook as the text of a file of format 4.5. The same notebook gives the same bytes. */
export function formatNotebook(notebook: Notebook): string {
  const cells = notebook.cells.map((cell) => ({
    ...(cell.attachments !== undefined && { attachments: cell.attachments }),
    cell_type: cell.type,
    ...(cell.type === 'code' && { execution_count: cell.executionCount }),
    id: cell.id,
    metadata: cell.metadata,
    ...(cell.type === 'code' && { outputs: cell.outputs.map(formatOutput) }),
    source: lines(cell.source),
  }));
  return `${JSON.stringify({ cells, metadata: notebook.metadata, nbformat: 4, nbformat_minor: 5 }, null, 1)}\n`;
}

function formatOutput(output: NotebookOutput): NotebookOutput {
  if (output.output_type === 'stream' && typeof output.text === 'string') return { ...output, text: lines(output.text) };
  if (typeof output.data !== 'object' || output.data === null) return output;
  const data = Object.entries(output.data).map(([type, content]) => [type, typeof content === 'string' && type.startsWith('text/') ? lines(content) : content]);
  return { ...output, data: Object.fromEntries(data) as Record<string, unknown> };
}

/** A text of an output, whether the file keeps it whole or as lines; undefined if it is no text. */
export function outputText(content: unknown): string | undefined {
  return joined(content);
}

/** Tags of a cell. */
export function cellTags(cell: NotebookCell): readonly string[] {
  return Array.isArray(cell.metadata.tags) ? (cell.metadata.tags as unknown[]).map(String) : [];
}
