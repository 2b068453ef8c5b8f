import { AssayError } from './errors';
import { CellGrid, type RawCell } from './grid';
import { sizeLimits } from './limits';
import type { OpenSheet } from './open-file';
import { xmlAttributes, xmlDocument, xmlText } from './xml-text';
import { ZipParts } from './zip';

/** Rows × columns merged into one cell, counted from 0, ends included. */
export interface Merge {
  readonly top: number;
  readonly left: number;
  readonly bottom: number;
  readonly right: number;
}

/**
 * Reads every sheet of an .xlsx file, straight from its parts. A general reader stops at the first faulty cell; here a faulty cell is
 * empty or a text, and the import report tells of it. Formulas are not evaluated and links not followed: a cell has its saved value.
 */
export function readXlsx(parts: ZipParts, file: string): OpenSheet[] {
  const text = (name: string): string => {
    const bytes = parts.read(name);
    return bytes === undefined ? '' : xmlDocument(bytes);
  };
  const bookPart = parts.has('xl/workbook.xml') ? 'xl/workbook.xml' : parts.names.find((name) => /(^|\/)workbook\.xml$/.test(name));
  if (bookPart === undefined) throw new AssayError(`${file} is not a workbook: it has no list of sheets. Save the sheet as .xlsx or .csv.`);
  const folder = bookPart.slice(0, bookPart.lastIndexOf('/') + 1);
  const book = text(bookPart);
  const targets = new Map<string, string>();
  for (const [tag] of text(`${folder}_rels/workbook.xml.rels`).matchAll(/<Relationship\b[^>]*>/g)) {
    const { Id, Target = '', TargetMode } = xmlAttributes(tag);
    if (TargetMode !== 'External') targets.set(Id, Target.startsWith('/') ? Target.slice(1) : folder + Target);
  }
  const strings = sharedStrings(text(`${folder}sharedStrings.xml`));
  const formats = cellFormats(text(`${folder}styles.xml`));
  const date1904 = /<workbookPr\b[^>]*\bdate1904\s*=\s*["'](1|true)/.test(book);
  const links = parts.names.some((name) => name.includes('externalLinks/'));
  let cells = 0;
  const sheets: OpenSheet[] = [];
  for (const [tag] of book.matchAll(/<sheet\b[^>]*>/g)) {
    const attributes = xmlAttributes(tag);
    const path = targets.get(attributes['r:id'] ?? attributes.id ?? Object.entries(attributes).find(([name]) => name.endsWith(':id'))?.[1] ?? '');
    const bytes = path === undefined ? undefined : parts.read(path);
    if (bytes === undefined) continue;
    const xml = xmlDocument(bytes);
    if (!xml.includes('<sheetData')) continue;
    const sheet = readCells(xml, { strings, formats, date1904, file, name: attributes.name ?? '' });
    cells += sheet.cells;
    if (cells > sizeLimits.workbookCells)
      throw new AssayError(`${file} has more than ${sizeLimits.workbookCells / 1e6} million cells. Export the sheet as .csv.`);
    spreadMerges(sheet.rows, mergesOf(xml));
    const remarks = sheet.remarks;
    if (links) remarks.push('the workbook links to other files: links are not followed, the saved values are used');
    sheets.push({ name: attributes.name ?? '', grid: new CellGrid(sheet.rows), hidden: /hidden/i.test(attributes.state ?? ''), remarks });
  }
  if (sheets.length === 0) throw new AssayError(`${file} has no sheet that can be read. Open it in a spreadsheet program and save it again.`);
  return sheets;
}

function sharedStrings(xml: string): string[] {
  const strings: string[] = [];
  let at = 0;
  for (;;) {
    const open = xml.indexOf('<si', at);
    if (open < 0) return strings;
    const openEnd = xml.indexOf('>', open);
    if (xml[openEnd - 1] === '/') {
      strings.push('');
      at = openEnd;
      continue;
    }
    const close = xml.indexOf('</si>', openEnd);
    if (close < 0) return strings;
    strings.push(richText(xml.slice(openEnd + 1, close)));
    at = close;
  }
}

/** The text of runs `<t>…</t>`, reading aids (`rPh`) left out. */
function richText(xml: string): string {
  const shown = xml.includes('<rPh') ? xml.replace(/<rPh\b[\s\S]*?<\/rPh>/g, '') : xml;
  let text = '';
  for (const [, run] of shown.matchAll(/<t(?:\s[^>]*)?>([\s\S]*?)<\/t>/g)) text += run;
  return xmlText(text).replace(/_x([0-9A-Fa-f]{4})_/g, (_, code: string) => String.fromCharCode(parseInt(code, 16)));
}

/** What a cell's number stands for, by its style: 0 a number, 1 a date, 2 a percentage. */
function cellFormats(xml: string): Uint8Array {
  const custom = new Map<number, string>();
  for (const [tag] of xml.matchAll(/<numFmt\b[^>]*>/g)) {
    const { numFmtId, formatCode = '' } = xmlAttributes(tag);
    custom.set(Number(numFmtId), formatCode.replace(/"[^"]*"|\\.|\[[^\]]*\]|_.|\*./g, ''));
  }
  const block = /<cellXfs\b[\s\S]*?<\/cellXfs>/.exec(xml)?.[0] ?? '';
  const kinds = [...block.matchAll(/<xf\b[^>]*>/g)].map(([tag]) => {
    const id = Number(xmlAttributes(tag).numFmtId ?? 0);
    const code = custom.get(id);
    if (code !== undefined) return code.includes('%') ? 2 : /[dyhs]|m{3}/i.test(code) && !/general/i.test(code) && !/[#0?]/.test(code) ? 1 : 0;
    return id === 9 || id === 10 ? 2 : (id >= 14 && id <= 22) || (id >= 27 && id <= 36) || (id >= 45 && id <= 47) || (id >= 50 && id <= 58) ? 1 : 0;
  });
  return Uint8Array.from(kinds);
}

interface CellContext {
  readonly strings: readonly string[];
  readonly formats: Uint8Array;
  readonly date1904: boolean;
  readonly file: string;
  readonly name: string;
}

function readCells(xml: string, context: CellContext): { rows: RawCell[][]; cells: number; remarks: string[] } {
  const rows: RawCell[][] = [];
  const seen = { formulas: 0, unsaved: 0, percent: 0, dates: 0 };
  let cells = 0;
  let row = -1;
  let column = 0;
  const end = xml.indexOf('</sheetData>');
  const stop = end < 0 ? xml.length : end;
  let at = xml.indexOf('<sheetData');
  while ((at = xml.indexOf('<', at + 1)) >= 0 && at < stop) {
    const second = xml.charCodeAt(at + 1);
    const third = xml.charCodeAt(at + 2);
    if (second === 0x72 && third === 0x6f) {
      // <row …>
      const close = xml.indexOf('>', at);
      const number = /\br="(\d+)"/.exec(xml.slice(at, close));
      row = number === null ? row + 1 : Number(number[1]) - 1;
      if (row > 1_048_575)
        throw new AssayError(`${context.file}, sheet "${context.name}": row ${row + 1} is beyond what a sheet can have. The file is damaged.`);
      column = 0;
      at = close;
    } else if (second === 0x63 && (third === 0x20 || third === 0x3e || third === 0x2f)) {
      // <c r="B2" s="1" t="s"> … </c>
      const close = xml.indexOf('>', at);
      if (close < 0) break;
      const tag = xml.slice(at + 2, close);
      const place = addressColumn(tag);
      if (place >= 0) column = place;
      if (column >= sizeLimits.columns)
        throw new AssayError(
          `${context.file}, sheet "${context.name}": row ${row + 1} has more than ${sizeLimits.columns} columns; no assay sheet has.`,
        );
      let value: RawCell;
      if (xml.charCodeAt(close - 1) === 0x2f) at = close;
      else {
        const endOfCell = xml.indexOf('</c>', close);
        if (endOfCell < 0) break;
        value = cellValue(tag, xml.slice(close + 1, endOfCell), context, seen);
        at = endOfCell;
      }
      if (value !== undefined && row >= 0) {
        (rows[row] ??= [])[column] = value;
        cells++;
      }
      column++;
    }
  }
  for (let i = 0; i < rows.length; i++) rows[i] ??= [];
  const remarks: string[] = [];
  if (seen.formulas > 0)
    remarks.push(
      `${seen.formulas} cells hold formulas: their saved values are used${seen.unsaved > 0 ? `, ${seen.unsaved} have none and are missing` : ''}`,
    );
  if (seen.percent > 0) remarks.push(`${seen.percent} cells are shown as percentages: taken as shown (0.52 shown as 52 % is 52)`);
  if (seen.dates > 0) remarks.push(`${seen.dates} cells are dates; sample names and values can be turned into dates by a spreadsheet program`);
  return { rows, cells, remarks };
}

/** Column number of `r="BC12"` in a start tag, or -1. */
function addressColumn(tag: string): number {
  const from = tag.indexOf('r="');
  if (from < 0 || tag.charCodeAt(from - 1) !== 0x20) return -1;
  let column = 0;
  for (let at = from + 3; ; at++) {
    const letter = tag.charCodeAt(at);
    if (letter < 65 || letter > 90) break;
    column = column * 26 + letter - 64;
    if (column > 100_000) break;
  }
  return column - 1;
}

function cellValue(
  tag: string,
  inside: string,
  context: CellContext,
  seen: { formulas: number; unsaved: number; percent: number; dates: number },
): RawCell {
  const start = inside.indexOf('<v');
  let raw: string | undefined;
  if (start >= 0) {
    const from = inside.indexOf('>', start) + 1;
    const stop = inside.indexOf('<', from);
    raw = stop >= 0 ? inside.slice(from, stop) : undefined;
  }
  const formula = inside.startsWith('<f');
  if (formula) {
    seen.formulas++;
    if (raw === undefined || raw === '') seen.unsaved++;
  }
  const typeAt = tag.indexOf('t="');
  const type = typeAt > 0 && tag.charCodeAt(typeAt - 1) === 0x20 ? tag.slice(typeAt + 3, tag.indexOf('"', typeAt + 3)) : 'n';
  switch (type) {
    case 's':
      return raw === undefined ? undefined : (context.strings[Number(raw)] ?? '#broken text');
    case 'inlineStr':
      return richText(inside);
    case 'str':
      return raw === undefined ? undefined : xmlText(raw);
    case 'b':
      return raw === '1' ? 'TRUE' : 'FALSE';
    case 'e':
      return raw ?? '#N/A';
    case 'd':
      seen.dates++;
      return raw;
    default: {
      if (raw === undefined || raw === '') return undefined;
      const value = Number(raw);
      if (Number.isNaN(value)) return raw;
      const styleAt = tag.indexOf('s="');
      const kind = styleAt > 0 && tag.charCodeAt(styleAt - 1) === 0x20 ? context.formats[parseInt(tag.slice(styleAt + 3), 10)] : 0;
      if (kind === 1) {
        seen.dates++;
        return dateText(value, context.date1904);
      }
      if (kind === 2) {
        seen.percent++;
        return Number((value * 100).toPrecision(15));
      }
      return value;
    }
  }
}

/** A date as a spreadsheet counts it (days from 1899-12-30, or from 1904), in ISO 8601. */
function dateText(days: number, date1904: boolean): string {
  const time = Date.UTC(date1904 ? 1904 : 1899, date1904 ? 0 : 11, date1904 ? 1 : 30) + Math.round(days * 86_400_000);
  const date = new Date(time);
  return Number.isNaN(date.getTime())
    ? String(days)
    : date
        .toISOString()
        .replace(/T00:00:00\.000Z$/, '')
        .replace(/\.000Z$/, '');
}

function mergesOf(xml: string): Merge[] {
  const merges: Merge[] = [];
  const place = (address: string): [number, number] | undefined => {
    const match = /^\$?([A-Z]{1,3})\$?(\d{1,7})$/.exec(address);
    if (match === null) return undefined;
    let column = 0;
    for (const letter of match[1]) column = column * 26 + letter.charCodeAt(0) - 64;
    return [Number(match[2]) - 1, column - 1];
  };
  for (const [, ref] of xml.matchAll(/<mergeCell\b[^>]*\bref="([^"]*)"/g)) {
    const [from, to] = ref.split(':').map(place);
    if (from !== undefined && to !== undefined) merges.push({ top: from[0], left: from[1], bottom: to[0], right: to[1] });
  }
  return merges;
}

/**
 * A text merged down several rows (a volcano's name beside its samples) stands for each of them. Nothing is spread sideways: a title
 * merged over the sheet would look like a row of cells.
 */
export function spreadMerges(rows: RawCell[][], merges: readonly Merge[]): void {
  for (const { top, left, bottom, right } of merges) {
    const value = rows[top]?.[left];
    if (left !== right || typeof value !== 'string' || bottom - top > 100_000) continue;
    for (let row = top + 1; row <= Math.min(bottom, rows.length - 1); row++) rows[row][left] ??= value;
  }
}
