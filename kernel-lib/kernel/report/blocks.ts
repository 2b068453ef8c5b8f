import type { MimeBundle, TableCell } from '../../display';
import { outputText } from '../notebook/document';
import { pngSize } from '../rich-value';

/** A part of a report, free of how it will be written. */
export type Block = HeadingBlock | TextBlock | FigureBlock | TableBlock | CodeBlock;

export interface HeadingBlock {
  readonly kind: 'heading';
  readonly level: 2 | 3;
  readonly text: string;
}

/** Text in Markdown, without HTML. */
export interface TextBlock {
  readonly kind: 'text';
  readonly markdown: string;
}

export interface FigureBlock {
  readonly kind: 'figure';
  /** PNG, base64. */
  readonly png: string;
  /** Size on the page in CSS pixels. */
  readonly width: number;
  readonly height: number;
  /** What the figure shows, for readers who cannot see it. */
  readonly described: string;
}

export interface TableBlock {
  readonly kind: 'table';
  readonly title: string;
  readonly columns: readonly string[];
  readonly rows: readonly (readonly string[])[];
  readonly notes: readonly string[];
}

/** Text as it was printed. */
export interface CodeBlock {
  readonly kind: 'printed';
  readonly text: string;
}

/** The blocks of one shown value: a picture before a table before text. */
export function blocksOfBundle(bundle: MimeBundle | Readonly<Record<string, unknown>>): Block[] {
  const text = outputText(bundle['text/plain']) ?? '';
  const png = outputText(bundle['image/png'])?.replace(/\s/g, '');
  if (png !== undefined && /^[A-Za-z0-9+/]+=*$/.test(png)) {
    const size = pngSize(png) ?? { width: 960, height: 720 };
    return [{ kind: 'figure', png, width: Math.round(size.width / 2), height: Math.round(size.height / 2), described: text.trim() || 'Figure' }];
  }
  const html = outputText(bundle['text/html']);
  const tables = html === undefined ? [] : tableBlocks(html);
  if (tables.length > 0) return tables;
  return text.trim() === '' ? [] : [{ kind: 'printed', text }];
}

interface Parser {
  write(text: string): void;
  end(): void;
}
type ParserModule = {
  Parser: new (handlers: { onopentag(name: string): void; ontext(text: string): void; onclosetag(name: string): void }, options: { decodeEntities: boolean }) => Parser;
};

/** Tables of shown HTML with the paragraphs after them. */
export function tableBlocks(html: string): TableBlock[] {
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const { Parser } = require('htmlparser2') as ParserModule;
  const tables: { kind: 'table'; title: string; columns: string[]; rows: string[][]; notes: string[] }[] = [];
  let text = '';
  let row: string[] = [];
  let heads = 0;
  const parser = new Parser(
    {
      onopentag: (name) => {
        if (name === 'table') tables.push({ kind: 'table', title: '', columns: [], rows: [], notes: [] });
        if (name === 'tr') [row, heads] = [[], 0];
        text = '';
      },
      ontext: (part) => void (text += part),
      onclosetag: (name) => {
        const table = tables.at(-1);
        if (table === undefined) return;
        if (name === 'caption') table.title = text.trim();
        else if (name === 'th' || name === 'td') {
          row.push(text.trim());
          if (name === 'th') heads++;
        } else if (name === 'tr') {
          if (heads === row.length && table.columns.length === 0) table.columns = row;
          else if (row.length > 0) table.rows.push(row);
        } else if (name === 'p' && text.trim() !== '') table.notes.push(text.trim());
        text = '';
      },
    },
    { decodeEntities: true },
  );
  parser.write(html);
  parser.end();
  return tables.filter(({ columns, rows }) => columns.length > 0 || rows.length > 0);
}

/** A table block of plain values. */
export function tableBlock(title: string, columns: readonly string[], rows: readonly (readonly TableCell[])[], notes: readonly string[] = []): TableBlock {
  return { kind: 'table', title, columns, rows: rows.map((cells) => cells.map((each) => (each === null || each === undefined || Number.isNaN(each) ? '' : String(each)))), notes };
}
