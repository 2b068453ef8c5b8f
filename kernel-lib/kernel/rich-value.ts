import { inspect } from 'node:util';
import { isShowable, jupyterDisplay, tableBundle, type MimeBundle, type TableCell } from '../display';
import { isFrame, type FrameLike } from '../suite';
import { noteShown } from './record/shown-steps';

/** A value made ready for a front end. */
export interface RichValue {
  readonly data: Readonly<Record<string, unknown>>;
  readonly metadata: Readonly<Record<string, unknown>>;
}

/** An entry larger than this is left out with a message: notebooks of tens of megabytes stop opening. */
const mostEntry = 8_000_000;
const mostPlainText = 20_000;
const shownRows = 60;

/**
 * What to show for a value: its own bundle if it has one, a table for a data frame, text for anything else. Promises are waited for.
 *
 * @returns undefined for undefined, which shows nothing; a list of showable values gives one entry each
 */
export async function richValues(value: unknown): Promise<readonly RichValue[]> {
  const settled: unknown = await value;
  if (settled === undefined) return [];
  if (Array.isArray(settled) && settled.length > 0 && settled.length <= 20 && settled.every(hasPicture)) {
    return Promise.all(settled.map(richValue));
  }
  return [await richValue(settled)];
}

async function richValue(value: unknown): Promise<RichValue> {
  const { toMimeMetadata } = (value ?? {}) as { toMimeMetadata?: () => RichValue['metadata'] | Promise<RichValue['metadata']> };
  const data = finish(await bundleOf(value));
  return { data, metadata: typeof toMimeMetadata === 'function' ? await toMimeMetadata.call(value) : {} };
}

interface DisplayConvention {
  [jupyterDisplay]?: () => MimeBundle | Promise<MimeBundle>;
}

const hasPicture = (value: unknown): boolean =>
  isShowable(value) || isFrame(value) || typeof (value as DisplayConvention | null)?.[jupyterDisplay] === 'function';

async function bundleOf(value: unknown): Promise<MimeBundle> {
  noteShown(value);
  if (isShowable(value)) return value.toMimeBundle();
  const convention = (value as DisplayConvention | null)?.[jupyterDisplay];
  if (typeof convention === 'function') return convention.call(value);
  if (isFrame(value)) return tableBundle(frameView(value));
  const series = seriesView(value);
  if (series !== undefined) return tableBundle(series);
  return { 'text/plain': plainText(value) };
}

function plainText(value: unknown): string {
  const text = inspect(value, { depth: 3, maxArrayLength: 100, maxStringLength: 10_000, breakLength: 110 });
  return text.length > mostPlainText ? `${text.slice(0, mostPlainText)}\n… cut: ${text.length - mostPlainText} more characters` : text;
}

const cell = (value: unknown): TableCell => (typeof value === 'object' && value !== null ? inspect(value, { depth: 1 }) : (value as TableCell));

/** Only the rows that are shown are read: a frame may have millions. */
function frameView(frame: FrameLike & { readonly index?: readonly unknown[]; readonly shape?: readonly number[] }) {
  const values = frame.values as readonly (readonly unknown[])[];
  const index = Array.isArray(frame.index) ? frame.index : undefined;
  const totalRows = frame.shape?.[0] ?? values.length;
  return {
    title: `Data frame of ${totalRows} rows × ${frame.columns.length} columns`,
    columns: ['', ...frame.columns.map(String)],
    rows: values.slice(0, shownRows).map((row, i) => [cell(index?.[i] ?? i), ...(Array.isArray(row) ? row : [row]).map(cell)]),
    totalRows,
  };
}

/** One column of a data frame, known by its shape too. */
function seriesView(value: unknown) {
  const series = value as { values?: unknown; index?: unknown; columns?: unknown; iloc?: unknown; dtypes?: unknown } | null;
  if (typeof series !== 'object' || series === null || typeof series.iloc !== 'function') return undefined;
  const { values, index } = series;
  if (!Array.isArray(values) || !Array.isArray(index)) return undefined;
  const name = Array.isArray(series.columns) ? String(series.columns[0]) : 'value';
  return { columns: ['', name], rows: values.slice(0, shownRows).map((entry, i) => [cell(index[i]), cell(entry)]), totalRows: values.length };
}

/** The bundle as it may travel: plain JSON, and nothing too large. */
function finish(bundle: MimeBundle): RichValue['data'] {
  if (typeof bundle !== 'object' || bundle === null) throw new TypeError('toMimeBundle() must give an object from MIME type to content.');
  const data: Record<string, unknown> = {};
  const left: string[] = [];
  for (const [type, content] of Object.entries(bundle)) {
    if (content === undefined || content === null || !type.includes('/')) continue;
    const plain: unknown = content instanceof Uint8Array ? Buffer.from(content).toString('base64') : plainJson(content);
    const size = typeof plain === 'string' ? plain.length : JSON.stringify(plain).length;
    if (size > mostEntry) left.push(`${type} (${(size / 1e6).toFixed(0)} MB)`);
    else data[type] = plain;
  }
  if (left.length > 0) {
    const text = `Not shown, too large for a notebook: ${left.join(', ')}. Show fewer samples, or save it to a file.`;
    data['text/plain'] = typeof data['text/plain'] === 'string' ? `${data['text/plain']}\n${text}` : text;
  }
  return data;
}

const plainJson = (content: unknown): unknown => (typeof content === 'string' ? content : JSON.parse(JSON.stringify(content)));

/** Width and height from a PNG's first chunk. */
export function pngSize(base64: string): { width: number; height: number } | undefined {
  const head = Buffer.from(base64.slice(0, 64), 'base64');
  if (head.length < 24 || head.toString('latin1', 1, 4) !== 'PNG') return undefined;
  return { width: head.readUInt32BE(16), height: head.readUInt32BE(20) };
}
