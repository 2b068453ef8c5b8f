import { join } from 'node:path';
import { libraryFolder } from '../../tables';
import type { Block, TableBlock } from './blocks';
import { isNumeric } from './page';

type Document = PDFKit.PDFDocument;

const margin = 48;
const bodySize = 9.5;
const tableSize = 7.5;
const muted = '#4a4a4e';
const ink = '#1d1d1f';

/** The report as an A4 PDF with the library's own font inside. */
export async function reportPdf(title: string, blocks: readonly Block[]): Promise<Uint8Array> {
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const PdfDocument = require('pdfkit') as typeof import('pdfkit');
  const epoch = new Date(0);
  const pdf = new PdfDocument({ size: 'A4', margin, bufferPages: true, info: { Title: title, Producer: 'wedgework', Creator: 'wedgework', CreationDate: epoch, ModDate: epoch } });
  const fonts = join(libraryFolder(), 'assets', 'fonts');
  pdf.registerFont('regular', join(fonts, 'SourceSans3-Regular.ttf')).registerFont('italic', join(fonts, 'SourceSans3-It.ttf'));
  const chunks: Uint8Array[] = [];
  const finished = new Promise<void>((resolve, reject) => {
    pdf.on('data', (chunk: Uint8Array) => chunks.push(chunk));
    pdf.on('end', resolve);
    pdf.on('error', reject);
  });
  pdf.font('regular').fontSize(20).fillColor(ink).text(title).moveDown(0.6);
  for (const [i, block] of blocks.entries()) writeBlock(pdf, block, blocks[i + 1]);
  numberPages(pdf, title);
  pdf.end();
  await finished;
  return Buffer.concat(chunks);
}

const width = (pdf: Document): number => pdf.page.width - 2 * margin;
const left = (pdf: Document): number => pdf.page.height - margin - pdf.y;

/** Starts a page when less than `height` is left on this one. */
function makeRoom(pdf: Document, height: number): void {
  if (left(pdf) < height && pdf.y > margin) pdf.addPage();
}

function writeBlock(pdf: Document, block: Block, next: Block | undefined): void {
  switch (block.kind) {
    case 'heading': {
      // A heading stays with what follows it.
      makeRoom(pdf, next?.kind === 'figure' ? Math.min(figureSize(pdf, next.width, next.height).height + 60, pdf.page.height - 2 * margin) : 110);
      pdf.moveDown(0.8).font('regular').fontSize(block.level === 2 ? 14 : 11.5).fillColor(ink).text(block.text).moveDown(0.3);
      return;
    }
    case 'text':
      return writeMarkdown(pdf, block.markdown);
    case 'printed':
      pdf.font('regular').fontSize(tableSize).fillColor(muted).text(block.text).moveDown(0.5);
      return;
    case 'figure': {
      const size = figureSize(pdf, block.width, block.height);
      makeRoom(pdf, size.height + 8);
      pdf.image(Buffer.from(block.png, 'base64'), margin, pdf.y, size);
      pdf.y += size.height + 10;
      pdf.x = margin;
      return;
    }
    case 'table':
      return writeTable(pdf, block);
  }
}

/** CSS pixels to points, at most as wide as the text and as high as a page. */
function figureSize(pdf: Document, pixelsWide: number, pixelsHigh: number): { width: number; height: number } {
  const scale = Math.min(0.75, width(pdf) / pixelsWide, (pdf.page.height - 2 * margin) / pixelsHigh);
  return { width: pixelsWide * scale, height: pixelsHigh * scale };
}

interface Token {
  readonly type: string;
  readonly content: string;
  readonly children: readonly Token[] | null;
}

/** Paragraphs, lists and headings of a text; marks inside a line are read as plain text. */
function writeMarkdown(pdf: Document, text: string): void {
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const MarkdownIt = require('markdown-it') as typeof import('markdown-it');
  const tokens = new MarkdownIt({ html: false }).parse(text, {}) as readonly Token[];
  const inline = (token: Token): string => (token.children ?? []).map((child) => (child.type === 'softbreak' || child.type === 'hardbreak' ? ' ' : child.content)).join('');
  let depth = 0;
  let item = false;
  let heading = false;
  for (const token of tokens) {
    if (token.type === 'bullet_list_open' || token.type === 'ordered_list_open') depth++;
    else if (token.type === 'bullet_list_close' || token.type === 'ordered_list_close') depth--;
    else if (token.type === 'list_item_open') item = true;
    else if (token.type === 'heading_open') heading = true;
    else if (token.type === 'inline') {
      pdf.font('regular').fontSize(heading ? 11.5 : bodySize).fillColor(ink);
      const indent = depth * 12;
      if (item) {
        const line = pdf.heightOfString(inline(token), { width: width(pdf) - indent });
        makeRoom(pdf, Math.min(line, 60));
        pdf.text('•', margin + indent - 9, pdf.y, { lineBreak: false, continued: false });
        pdf.text(inline(token), margin + indent, pdf.y, { width: width(pdf) - indent });
        pdf.moveDown(0.15);
      } else {
        pdf.text(inline(token), margin + indent, pdf.y, { width: width(pdf) - indent, align: 'left' }).moveDown(0.4);
      }
      pdf.x = margin;
      [item, heading] = [false, false];
    } else if (token.type === 'fence' || token.type === 'code_block') pdf.font('regular').fontSize(tableSize).fillColor(muted).text(token.content, margin).moveDown(0.3);
  }
  pdf.moveDown(0.2);
}

const cellPadding = 4;
const narrowest = 26;

/** Widths by what the cells need, shrunk together where the page is too narrow for all; columns that then fit no text go to the next part. */
function columnWidths(pdf: Document, table: TableBlock): number[] {
  pdf.font('regular').fontSize(tableSize);
  const longest = table.columns.map((head, j) => {
    const texts = [head, ...table.rows.slice(0, 80).map((cells) => cells[j] ?? '')];
    return Math.min(width(pdf), Math.max(narrowest, ...texts.map((text) => pdf.widthOfString(text.slice(0, 200)) + 2 * cellPadding)));
  });
  const needed = longest.reduce((sum, each) => sum + each, 0);
  if (needed <= width(pdf)) return longest;
  // Narrow columns keep what they need; wide ones share the rest.
  const fair = width(pdf) / longest.length;
  const keeps = longest.map((each) => (each <= fair ? each : 0));
  const rest = width(pdf) - keeps.reduce((sum, each) => sum + each, 0);
  const wide = longest.reduce((sum, each, j) => sum + (keeps[j] === 0 ? each : 0), 0);
  return longest.map((each, j) => (keeps[j] === 0 ? (each / wide) * rest : each));
}

/** Most columns that one part of a table shows; more go below, each part with the first column again. */
const mostColumns = 12;

function writeTable(pdf: Document, table: TableBlock): void {
  if (table.columns.length <= mostColumns) return writePart(pdf, table, table.title);
  for (let from = 1, part = 1; from < table.columns.length; from += mostColumns - 1, part++) {
    const pick = (cells: readonly string[]) => [cells[0] ?? '', ...cells.slice(from, from + mostColumns - 1)];
    const last = from + mostColumns - 1 >= table.columns.length;
    writePart(pdf, { ...table, columns: pick(table.columns), rows: table.rows.map(pick), notes: last ? table.notes : [] }, part === 1 ? table.title : `${table.title} (continued)`);
  }
}

function writePart(pdf: Document, table: TableBlock, title: string): void {
  const widths = columnWidths(pdf, table);
  if (title !== '') {
    makeRoom(pdf, 70);
    pdf.font('regular').fontSize(bodySize).fillColor(ink).text(title, margin, pdf.y, { width: width(pdf) }).moveDown(0.3);
  }
  writeRow(pdf, table.columns, widths, true);
  for (const cells of table.rows) {
    const height = rowHeight(pdf, cells, widths);
    if (left(pdf) < height) {
      pdf.addPage();
      writeRow(pdf, table.columns, widths, true);
    }
    writeRow(pdf, cells, widths, false);
  }
  pdf.x = margin;
  pdf.moveDown(0.4);
  for (const note of table.notes) pdf.font('italic').fontSize(8).fillColor(muted).text(note, margin, pdf.y, { width: width(pdf) }).moveDown(0.2);
  pdf.moveDown(0.5);
}

function rowHeight(pdf: Document, cells: readonly string[], widths: readonly number[]): number {
  pdf.font('regular').fontSize(tableSize);
  return Math.max(10, ...widths.map((each, j) => pdf.heightOfString(cells[j] ?? '', { width: each - 2 * cellPadding }))) + 3;
}

function writeRow(pdf: Document, cells: readonly string[], widths: readonly number[], head: boolean): void {
  const height = rowHeight(pdf, cells, widths);
  const top = pdf.y;
  let x = margin;
  pdf.font('regular').fontSize(tableSize).fillColor(head ? muted : ink);
  widths.forEach((each, j) => {
    const text = cells[j] ?? '';
    pdf.text(text, x + cellPadding, top + 1.5, { width: each - 2 * cellPadding, align: !head && isNumeric(text) ? 'right' : 'left' });
    x += each;
  });
  pdf.moveTo(margin, top + height).lineTo(x, top + height).lineWidth(head ? 0.8 : 0.3).strokeColor(head ? '#8a8a90' : '#dedee2').stroke();
  pdf.y = top + height;
  pdf.x = margin;
}

function numberPages(pdf: Document, title: string): void {
  const { start, count } = pdf.bufferedPageRange();
  for (let i = start; i < start + count; i++) {
    pdf.switchToPage(i);
    const { bottom } = pdf.page.margins;
    // Writing below the text must not start a new page.
    pdf.page.margins.bottom = 0;
    pdf.font('regular').fontSize(8).fillColor(muted).text(`${title}   ·   page ${i - start + 1} of ${count}`, margin, pdf.page.height - 30, { width: width(pdf), align: 'center', lineBreak: false });
    pdf.page.margins.bottom = bottom;
  }
}
