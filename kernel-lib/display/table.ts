import { escapeHtml, escapeMarkdown } from './escape';
import type { MimeBundle } from './mime';

/** A value in a shown table. `null`, `undefined` and NaN show as an empty cell. */
export type TableCell = string | number | boolean | null | undefined;

/** A plain table to look at: column heads, rows of cells, an optional title above and notes below. */
export interface TableView {
  readonly title?: string;
  readonly columns: readonly string[];
  readonly rows: readonly (readonly TableCell[])[];
  /** How many rows there are in all, when `rows` holds only the first ones. */
  readonly totalRows?: number;
  /** How many rows are shown before the rest is only counted (default 60). */
  readonly mostRows?: number;
  readonly notes?: readonly string[];
}

/** Longest table shown whole; more rows are cut and counted. */
const mostRows = 60;
const mostColumns = 40;

/** A number as a reader wants it: up to six significant digits, no trailing noise. */
export function formatNumber(value: number): string {
  if (Number.isNaN(value)) return '';
  if (value === 0 || !Number.isFinite(value)) return String(value === 0 ? 0 : value);
  const size = Math.abs(value);
  return size >= 1e7 || size < 1e-5 ? value.toExponential(3) : String(Number(value.toPrecision(6)));
}

function cellText(cell: TableCell): string {
  if (cell === null || cell === undefined) return '';
  return typeof cell === 'number' ? formatNumber(cell) : String(cell);
}

function cut(view: TableView): { heads: string[]; rows: TableCell[][]; notes: string[] } {
  const total = view.totalRows ?? view.rows.length;
  const wide = view.columns.length > mostColumns;
  const heads = view.columns.slice(0, mostColumns);
  const rows = view.rows.slice(0, view.mostRows ?? mostRows).map((row) => row.slice(0, mostColumns));
  const notes = [...(view.notes ?? [])];
  if (total > rows.length) notes.push(`${rows.length} of ${total} rows shown.`);
  if (wide) notes.push(`${mostColumns} of ${view.columns.length} columns shown.`);
  return { heads, rows, notes };
}

/** A column of numbers, empty cells apart: its head stands over them on the right. */
function isNumeric(rows: readonly (readonly TableCell[])[], column: number): boolean {
  return rows.some((row) => typeof row[column] === 'number') && rows.every((row) => typeof row[column] === 'number' || row[column] == null);
}

/** The table as a bundle of plain HTML, Markdown and text, every text escaped; long tables are cut with a count. */
export function tableBundle(view: TableView): MimeBundle {
  return { 'text/html': tableHtml(view), 'text/markdown': tableMarkdown(view), 'text/plain': tableText(view) };
}

/** The table as plain HTML with no style block: front ends bring their own. */
export function tableHtml(view: TableView): string {
  const { heads, rows, notes } = cut(view);
  const caption = view.title === undefined ? '' : `<caption>${escapeHtml(view.title)}</caption>`;
  const head = heads.map((text, j) => `<th scope="col"${isNumeric(rows, j) ? ' align="right"' : ''}>${escapeHtml(text)}</th>`).join('');
  const body = rows
    .map((row) => {
      const cells = row.map((cell) => `<td${typeof cell === 'number' ? ' align="right"' : ''}>${escapeHtml(cellText(cell))}</td>`);
      return `<tr>${cells.join('')}</tr>`;
    })
    .join('\n');
  const foot = notes.map((note) => `<p>${escapeHtml(note)}</p>`).join('\n');
  return `<table border="1">${caption}<thead><tr>${head}</tr></thead>\n<tbody>\n${body}\n</tbody></table>${foot === '' ? '' : `\n${foot}`}`;
}

export function tableMarkdown(view: TableView): string {
  const { heads, rows, notes } = cut(view);
  const lines = [
    `| ${heads.map(escapeMarkdown).join(' | ')} |`,
    `|${heads.map((_, j) => (isNumeric(rows, j) ? '---:' : '---')).join('|')}|`,
    ...rows.map((row) => `| ${row.map((cell) => escapeMarkdown(cellText(cell))).join(' | ')} |`),
  ];
  const title = view.title === undefined ? [] : [`**${escapeMarkdown(view.title)}**`, ''];
  return [...title, ...lines, ...notes.flatMap((note) => ['', escapeMarkdown(note)])].join('\n');
}

export function tableText(view: TableView): string {
  const { heads, rows, notes } = cut(view);
  const texts = rows.map((row) => row.map(cellText));
  const widths = heads.map((head, j) => Math.min(40, texts.reduce((width, row) => Math.max(width, (row[j] ?? '').length), head.length)));
  const clip = (text: string, width: number) => (text.length > width ? `${text.slice(0, width - 1)}…` : text);
  const line = (cells: readonly string[], row?: readonly TableCell[]) =>
    cells
      .map((text, j) => (typeof row?.[j] === 'number' ? clip(text, widths[j]).padStart(widths[j]) : clip(text, widths[j]).padEnd(widths[j])))
      .join('  ')
      .trimEnd();
  return [
    ...(view.title === undefined ? [] : [view.title]),
    line(heads),
    widths.map((width) => '─'.repeat(width)).join('  '),
    ...texts.map((cells, i) => line(cells, rows[i])),
    ...notes,
  ].join('\n');
}
