import { cellLook, TurnedGrid, type Grid } from './grid';
import { unguarded } from './guarded';
import { ownTag, readHeading } from './heading';
import { plainSigns, spellingKey, vocabulary } from './spellings';

/** Where things stand in a sheet. Rows and columns are counted from 0 in `grid`, which is turned where the samples stand in columns. */
export interface Layout {
  readonly grid: Grid;
  readonly samplesIn: 'rows' | 'columns';
  /** Rows of the header block, by what they hold. */
  readonly header: {
    readonly analyte: number;
    readonly unit?: number;
    readonly method?: number;
    readonly limit?: number;
    readonly upperLimit?: number;
  };
  /** The head of each column as written. */
  readonly heads: readonly string[];
  /** Unit and method written beside the head in rows of their own ('' where none), and the detection limits. */
  readonly units: readonly string[];
  readonly methods: readonly string[];
  /** Rows that hold samples. */
  readonly body: Uint32Array;
  /** Rows left out, with the reason. */
  readonly skipped: readonly { readonly row: number; readonly why: string; readonly text: string }[];
  /** All text that stands outside the table: titles above, footnotes below. */
  readonly prose: readonly string[];
  /** The head row is in capitals throughout. */
  readonly upperCase: boolean;
  /** The row where another table starts below this one. */
  readonly next?: number;
}

/** Number columns of written sheets. */
const ownNumbers = / \[(number|1 sigma)\]$/;
/** What a single letter counts towards a head row: `B` and `K` are more often names of samples than boron and potassium. */
const loneLetter = 0.1;
const searchRows = 60;
const searchColumns = 600;

export interface LayoutOptions {
  readonly samplesIn?: 'rows' | 'columns';
  /** Row of the analyte names, from 0. */
  readonly headerRow?: number;
  /** Heads that the user has settled count like analytes. */
  readonly settings?: Readonly<Record<string, unknown>>;
}

/** What a text names: an analyte, or a column that the user has settled (which counts like one). */
function nameOf(text: string, upperCase: boolean, settings: Readonly<Record<string, unknown>>): string | undefined {
  if (Object.hasOwn(settings, text)) return text;
  const heading = readHeading(text, upperCase);
  return heading.role === 'analyte' ? heading.symbol : undefined;
}

interface HeadRow {
  readonly row: number;
  readonly analytes: number;
  readonly upperCase: boolean;
}

/**
 * Finds the tables in a sheet, one below the other: each starts with a row (or column, where the samples stand side by side) that names
 * analytes, and ends where a row names others.
 *
 * @returns none when no row and no column names an analyte
 */
export function findLayouts(sheet: Grid, options: LayoutOptions = {}): Layout[] {
  const { settings = {} } = options;
  const first = findFirst(sheet, settings, options);
  if (first === undefined) return [];
  const layouts = [first];
  for (let next = first.next; next !== undefined; next = layouts[layouts.length - 1].next) {
    layouts.push(layOut(sheet, headRow(sheet, settings, next, next + 1)!, settings, 'rows', next));
  }
  return layouts;
}

function findFirst(sheet: Grid, settings: Readonly<Record<string, unknown>>, options: LayoutOptions): Layout | undefined {
  const turned = new TurnedGrid(sheet);
  const inRows =
    options.samplesIn === 'columns'
      ? undefined
      : headRow(sheet, settings, options.headerRow ?? 0, options.headerRow === undefined ? searchRows : options.headerRow + 1);
  const inColumns = options.samplesIn === 'rows' || options.headerRow !== undefined ? undefined : headRow(turned, settings, 0, searchRows);
  if (inRows === undefined && inColumns === undefined) return undefined;
  // Sample names can look like analytes (`B`, `V-51`), so a column must name clearly more of them than any row does.
  if (inColumns !== undefined && inColumns.analytes > 1.5 * (inRows?.analytes ?? 0)) return layOut(turned, inColumns, settings, 'columns');
  return layOut(sheet, inRows!, settings, 'rows');
}

/** The first row that names about as many analytes as any: a second table further down may name more. */
function headRow(grid: Grid, settings: Readonly<Record<string, unknown>>, from: number, to: number): HeadRow | undefined {
  const found: HeadRow[] = [];
  const columns = Math.min(grid.columns, searchColumns);
  for (let row = from; row < Math.min(grid.rows, to); row++) {
    const texts: string[] = [];
    for (let column = 0; column < columns; column++) {
      const look = grid.look(row, column);
      if (look === cellLook.text) texts.push(grid.text(row, column));
    }
    const lettered = texts.filter((text) => /\p{L}{2}/u.test(text));
    const upperCase = lettered.length >= 3 && lettered.every((text) => !/\p{Ll}/u.test(text.replace(/\b(wt|ppm|ppb|pct)\b/gi, '')));
    const analytes = new Map<string, number>();
    let labels = 0;
    for (const text of texts) {
      const symbol = ownTag.test(text) ? text : nameOf(text, upperCase, settings);
      if (symbol !== undefined) analytes.set(symbol, Math.max(analytes.get(symbol) ?? 0, text.length === 1 ? loneLetter : 1));
      else if (/label|quantity/.test(readHeading(text, upperCase).role)) labels++;
    }
    // A sheet of places without any analyte is known by two heads such as latitude and sample.
    const named = [...analytes.values()].reduce((sum, weight) => sum + weight, 0);
    const count = named > 0 ? named + (labels > 0 ? 0.5 : 0) : labels > 1 ? 0.01 * labels : 0;
    if (count > 0) found.push({ row, analytes: count, upperCase });
  }
  const most = found.reduce((best, { analytes }) => Math.max(best, analytes), 0);
  return found.find(({ analytes }) => analytes === most || (analytes >= 2 && analytes >= 0.5 * most));
}

/** Whether a row below a table starts another one: it names analytes, and not the same ones in the same columns as above. */
function startsAnother(grid: Grid, row: number, heads: readonly string[], settings: Readonly<Record<string, unknown>>): boolean {
  let texts = 0;
  let analytes = 0;
  let others = 0;
  for (let column = 0; column < Math.min(grid.columns, searchColumns); column++) {
    if (grid.look(row, column) !== cellLook.text) continue;
    texts++;
    const text = grid.text(row, column);
    if (nameOf(text, false, settings) === undefined) continue;
    analytes++;
    if (text !== heads[column]) others++;
  }
  return others > 0 && analytes >= 2 && analytes >= 0.5 * texts;
}

function layOut(grid: Grid, head: HeadRow, settings: Readonly<Record<string, unknown>>, samplesIn: 'rows' | 'columns', start = 0): Layout {
  const columns = grid.columns;
  const words = vocabulary();
  const rowTexts = (row: number) => Array.from({ length: columns }, (_, column) => grid.text(row, column));
  const heads = rowTexts(head.row).map(unguarded);
  const isAnalyte = heads.map((text) => nameOf(text, head.upperCase, settings) !== undefined || ownNumbers.test(text));
  const kindOf = (row: number) => headerKind(grid, row, isAnalyte, words);
  const header: { analyte: number; unit?: number; method?: number; limit?: number; upperLimit?: number } = { analyte: head.row };
  let top = head.row;
  for (let row = head.row - 1; row >= 0 && row >= head.row - 4; row--) {
    const kind = kindOf(row);
    if (kind === undefined || header[kind] !== undefined) break;
    header[kind] = row;
    top = row;
  }
  let bottom = head.row;
  for (let row = head.row + 1; row < Math.min(grid.rows, head.row + 5); row++) {
    const kind = kindOf(row);
    if (kind === undefined) {
      if (isBlank(grid, row)) continue;
      break;
    }
    if (header[kind] !== undefined) break;
    header[kind] = row;
    bottom = row;
  }
  const unitTexts = header.unit === undefined ? [] : filled(rowTexts(header.unit), isAnalyte);
  const methodTexts = header.method === undefined ? [] : filled(rowTexts(header.method), isAnalyte);
  // A label's name may stand in another row of the header block than the analytes.
  for (let column = 0; column < columns; column++) {
    if (heads[column] !== '' && words.headerRows.get(spellingKey(heads[column])) === undefined) continue;
    for (const row of [header.unit, header.method, header.limit]) {
      const text = row === undefined ? '' : grid.text(row, column);
      const key = spellingKey(text);
      if (heads[column] === '' || words.headerRows.has(spellingKey(heads[column]))) {
        if (
          text !== '' &&
          grid.look(row!, column) === cellLook.text &&
          !words.headerRows.has(key) &&
          !words.units.has(key) &&
          !words.methods.has(key)
        )
          heads[column] = text;
      }
    }
  }
  const prose: string[] = [];
  const above = Array.from({ length: Math.max(0, top - start) }, (_, k) => ({
    row: start + k,
    why: 'above the table',
    text: rowTexts(start + k)
      .filter(Boolean)
      .join(' '),
  }));
  for (const { text } of above) if (text !== '') prose.push(text);
  const isNext = (row: number) => samplesIn === 'rows' && startsAnother(grid, row, heads, settings);
  const { body, skipped, limit, upperLimit, next } = findBody(grid, bottom + 1, heads, isAnalyte, words, isNext);
  for (const { why, text } of skipped) if (why === 'no analysis in it') prose.push(text);
  return {
    grid,
    samplesIn,
    heads,
    body,
    skipped: [...above.filter(({ text }) => text !== ''), ...skipped],
    prose,
    upperCase: head.upperCase,
    next,
    header: { ...header, limit: header.limit ?? limit, upperLimit: header.upperLimit ?? upperLimit },
    units: heads.map((_, column) => unitTexts[column] ?? ''),
    methods: heads.map((_, column) => methodTexts[column] ?? ''),
  };
}

type Words = ReturnType<typeof vocabulary>;

function isBlank(grid: Grid, row: number): boolean {
  for (let column = 0; column < grid.width(row); column++) if (grid.look(row, column) !== cellLook.empty) return false;
  return true;
}

/** What a row beside the head row holds, by its first word or by what stands under the analytes. */
function headerKind(grid: Grid, row: number, isAnalyte: readonly boolean[], words: Words): 'unit' | 'method' | 'limit' | 'upperLimit' | undefined {
  let named: 'unit' | 'method' | 'limit' | 'upperLimit' | undefined;
  let filledCells = 0;
  let units = 0;
  let methods = 0;
  let numbers = 0;
  for (let column = 0; column < isAnalyte.length; column++) {
    const look = grid.look(row, column);
    if (look === cellLook.empty) continue;
    if (look === cellLook.text) {
      const text = grid.text(row, column);
      const key = spellingKey(text);
      if (!isAnalyte[column]) {
        const kind = words.headerRows.get(key);
        if (kind !== undefined && kind !== 'analyte') named ??= kind;
        continue;
      }
      filledCells++;
      if (words.units.has(unitKey(text))) units++;
      else if (words.methods.has(key) || /^(?=.*\d)[A-Z0-9]+([-/][A-Z0-9]+)*$/.test(text) || /^[A-Z]{2,}([-/ ][A-Z0-9]+)*$/.test(text)) methods++;
    } else if (isAnalyte[column]) {
      filledCells++;
      numbers++;
    }
  }
  if (named !== undefined && filledCells > 0) return named;
  if (filledCells === 0 || numbers > 0) return undefined;
  if (units >= 0.6 * filledCells) return 'unit';
  // A row of detection limits or of missing values must not pass for a row of methods.
  return methods >= 0.6 * filledCells ? 'method' : undefined;
}

/** The key of a unit that may stand in brackets of its own. */
export function unitKey(text: string): string {
  return spellingKey(
    plainSigns(text)
      .replace(/^[([]\s*|\s*[)\]]$/g, '')
      .replace(/^in /i, ''),
  );
}

/** A row of units or methods in which a merged cell stands for those to its right: filled to the right where few cells are written. */
function filled(texts: readonly string[], isAnalyte: readonly boolean[]): string[] {
  const written = texts.filter((text, column) => text !== '' && isAnalyte[column]).length;
  const wanted = isAnalyte.filter(Boolean).length;
  if (written * 2 > wanted) return [...texts];
  let last = '';
  return texts.map((text, column) => {
    if (text !== '') last = text;
    else if (!isAnalyte[column]) last = '';
    return text !== '' ? text : isAnalyte[column] ? last : '';
  });
}

function findBody(grid: Grid, from: number, heads: readonly string[], isAnalyte: readonly boolean[], words: Words, isNext: (row: number) => boolean) {
  let next: number | undefined;
  const body: number[] = [];
  const skipped: { row: number; why: string; text: string }[] = [];
  let limit: number | undefined;
  let upperLimit: number | undefined;
  const analyteColumns = heads.flatMap((_, column) => (isAnalyte[column] ? [column] : []));
  const labelColumns = heads.flatMap((_, column) => (isAnalyte[column] ? [] : [column]));
  for (let row = from; row < grid.rows; row++) {
    let numbers = 0;
    for (const column of analyteColumns) {
      const look = grid.look(row, column);
      if (look === cellLook.number || look === cellLook.below) {
        numbers++;
        break;
      }
    }
    const first = firstText(grid, row, labelColumns);
    const kind = first === '' ? undefined : words.headerRows.get(spellingKey(first));
    if (kind === 'unit' || kind === 'method') {
      skipped.push({ row, why: kind === 'unit' ? 'units' : 'methods', text: first });
      continue;
    }
    if (numbers > 0) {
      if (kind === 'limit' || kind === 'upperLimit') {
        if (kind === 'limit') limit ??= row;
        else upperLimit ??= row;
        skipped.push({ row, why: kind === 'limit' ? 'detection limits' : 'upper limits', text: first });
      } else body.push(row);
      continue;
    }
    let texts = 0;
    let same = 0;
    let unitCells = 0;
    for (const column of analyteColumns) {
      const text = grid.text(row, column);
      if (text === '') continue;
      texts++;
      if (text === heads[column]) same++;
      if (words.units.has(unitKey(text))) unitCells++;
    }
    let labels = 0;
    let longText = '';
    for (const column of labelColumns) {
      const text = grid.text(row, column);
      if (text === '') continue;
      labels++;
      longText = longText === '' ? text : `${longText} ${text}`;
    }
    if (texts === 0 && labels === 0) continue;
    if (texts + labels > 2 && isNext(row)) {
      next = row;
      break;
    }
    if (texts > 0 && same >= 0.5 * texts && same > 0) skipped.push({ row, why: 'the head row again', text: longText });
    else if (texts > 0 && unitCells >= 0.6 * texts) skipped.push({ row, why: 'the units again', text: longText });
    else if (texts > 0 || labels > 1 || (labels === 1 && labelColumns.length === 1 && !/\s/.test(longText) && longText.length <= 24)) body.push(row);
    else skipped.push({ row, why: 'no analysis in it', text: longText || grid.text(row, 0) });
  }
  return { body: Uint32Array.from(body), skipped, limit, upperLimit, next };
}

function firstText(grid: Grid, row: number, columns: readonly number[]): string {
  for (const column of columns) {
    if (grid.look(row, column) === cellLook.text) return grid.text(row, column);
  }
  return '';
}
