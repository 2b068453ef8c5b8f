import { cellState } from '../suite';
import type { CellConventions } from './cells';
import { decodeColumns, type DecodedSheet, type Withheld } from './decode-columns';
import { DelimitedGrid } from './delimited';
import { AssayError } from './errors';
import { cellLook } from './grid';
import type { Layout } from './layout';
import type { OpenSheet } from './open-file';
import { planColumns, type PlanOptions } from './plan-columns';

/** One sheet read: its columns and labels, and what has to be said about it. */
export interface ReadSheet {
  readonly name: string;
  readonly layout: Layout;
  readonly decoded: DecodedSheet;
  readonly conventions: CellConventions;
  readonly inferred: readonly string[];
  readonly ignored: readonly string[];
  readonly pleaseCheck: readonly string[];
}

export interface SheetOptions extends PlanOptions {
  readonly decimal?: '.' | ',';
  readonly negative?: 'below-detection' | 'error';
  readonly notDetermined?: 'missing' | 'below-detection';
  readonly statedSigmas?: 1 | 2;
}

const mostSkippedListed = 40;

/** Reads the body of a sheet whose layout is known. */
export function readSheet(sheet: OpenSheet, found: Layout, options: SheetOptions, where: string, used: Set<string>): ReadSheet {
  const { withheld, remarks, body } = unevenRows(sheet, found, where);
  const layout = { ...found, body };
  const decimal = options.decimal ?? decimalMark(layout);
  if (sheet.grid instanceof DelimitedGrid) sheet.grid.useDecimal(decimal);
  const columnsWithHeads = sheet.grid instanceof DelimitedGrid && layout.samplesIn === 'rows' ? sheet.grid.width(layout.header.analyte) : Infinity;
  const { columns, notes } = planColumns(layout, { ...options, columnsWithHeads }, used);
  const inferred = [...notes.inferred];
  if (options.decimal === undefined && decimal === ',') inferred.push('the decimal mark is a comma');
  const said = legend(layout.prose);
  if (options.negative === undefined && said.negative !== undefined)
    inferred.push(`negative values are below detection: the sheet says "${said.negative}"`);
  if (options.notDetermined === undefined && said.notDetermined !== undefined)
    inferred.push(
      `n.d. is ${said.notDetermined.means === 'missing' ? 'not determined (missing)' : 'not detected (below detection)'}: the sheet says "${said.notDetermined.words}"`,
    );
  const conventions: CellConventions = {
    decimal,
    negative: options.negative ?? (said.negative === undefined ? 'error' : 'below-detection'),
    notDetermined: options.notDetermined ?? said.notDetermined?.means ?? 'missing',
    statedSigmas: options.statedSigmas ?? 1,
  };
  const decoded = decodeColumns(layout, columns, conventions, sheet.name, withheld);
  const skipped = layout.skipped.filter(({ why }) => why !== 'detection limits' && why !== 'upper limits');
  const ignored = [
    ...notes.ignored,
    ...skipped
      .slice(0, mostSkippedListed)
      .map(
        ({ row, why, text }) =>
          `${layout.samplesIn === 'rows' ? 'row' : 'column'} ${row + 1}: ${why}${text === '' ? '' : ` ("${text.slice(0, 80)}")`}`,
      ),
    ...(skipped.length > mostSkippedListed ? [`${skipped.length - mostSkippedListed} more rows`] : []),
  ];
  return {
    name: sheet.name,
    layout,
    decoded,
    conventions,
    inferred,
    ignored,
    pleaseCheck: [...sheet.remarks, ...remarks, ...notes.pleaseCheck, ...nameless(layout, decoded), ...decoded.remarks],
  };
}

/** Rows that hold values but no sample name: often half of a row that was broken in two. */
function nameless({ body, samplesIn }: Layout, { labels, columns }: DecodedSheet): string[] {
  const names = labels.get('sample');
  if (names === undefined) return [];
  const rows = names.flatMap((name, i) => (name === '' && columns.some(({ states }) => states[i] !== cellState.missing) ? [i] : []));
  const one = samplesIn === 'rows' ? 'row' : 'column';
  return rows.length === 0
    ? []
    : [
        `no sample name in ${rows
          .slice(0, 20)
          .map((i) => `${one} ${body[i] + 1}`)
          .join(', ')}${rows.length > 20 ? ` and ${rows.length - 20} more` : ''}`,
      ];
}

/** The decimal mark of the sheet: a comma where cells such as `52,1` outnumber cells such as `52.1`. */
function decimalMark({ grid, body }: Layout): '.' | ',' {
  let points = 0;
  let commas = 0;
  for (let i = 0; i < Math.min(body.length, 200); i++) {
    for (let column = 0; column < Math.min(grid.columns, 200); column++) {
      if (grid.look(body[i], column) === cellLook.empty) continue;
      const text = grid.text(body[i], column);
      // `1,234` could be either; it does not vote.
      if (/^[<>~]?\s*-?\d+,\d+$/.test(text) && !/^[<>~]?\s*-?[1-9]\d{0,2},\d{3}$/.test(text)) commas++;
      else if (/^[<>~]?\s*-?\d*\.\d+$/.test(text) && !/^[<>~]?\s*-?[1-9]\d{0,2}\.\d{3}$/.test(text)) points++;
    }
  }
  return commas > points ? ',' : '.';
}

/** What the text around the table says about its cells. */
function legend(prose: readonly string[]): { negative?: string; notDetermined?: { means: 'missing' | 'below-detection'; words: string } } {
  let negative: string | undefined;
  let notDetermined: { means: 'missing' | 'below-detection'; words: string } | undefined;
  for (const text of prose) {
    negative ??=
      /(negative\s+(values?|numbers?|concentrations?|results?)|(?:^|\s)(?:-|minus)\s*sign).{0,40}?(below|less than|under|<)\s*[\w\s]{0,12}(detection|limit|d\.?l\.?)/i.exec(
        text,
      )?.[0];
    const means =
      /\bn\.?\s?d\.?["']?\s*(?:=|:|–|—|-|,|\bis\b|\bmeans\b|\bdenotes\b)\s*["']?((?:not\s+(?:detected|determined|analy[sz]ed|measured|available))|below\s+(?:the\s+)?(?:limit|detection|d\.?l)|no\s+data)/i.exec(
        text,
      );
    if (means !== null) notDetermined ??= { means: /detected|below/i.test(means[1]) ? 'below-detection' : 'missing', words: means[0] };
  }
  return { negative, notDetermined };
}

/** What uneven rows mean for the sheet: whose numbers are not taken, and which rows of the body are samples. */
interface Uneven {
  readonly withheld: Withheld;
  readonly remarks: readonly string[];
  readonly body: Uint32Array;
}

/**
 * Rows of a text file that have more or fewer cells than the head: with a delimiter lost or added, every cell after it stands under the
 * wrong head, so their numbers are not taken. A file whose rows end early all over leaves off empty cells at the end, and is taken.
 */
function unevenRows(sheet: OpenSheet, layout: Layout, where: string): Uneven {
  const nothing: Uneven = { withheld: { rows: new Set(), columns: new Set() }, remarks: [], body: layout.body };
  if (!(sheet.grid instanceof DelimitedGrid)) return nothing;
  const { grid } = sheet;
  if (layout.samplesIn === 'columns') return unevenAnalytes(grid, layout);
  const wanted = grid.width(layout.header.analyte);
  const long: number[] = [];
  const short: number[] = [];
  for (const row of layout.body) {
    const width = grid.width(row);
    if (width < wanted) short.push(row);
    else if (width > wanted && hasMore(grid, row, wanted)) long.push(row);
  }
  const misfit = [long, sameWidth(grid, short)].find((rows) => rows.length > 0.8 * layout.body.length && layout.body.length > 1);
  if (misfit !== undefined) {
    throw new AssayError(
      `${where}: the head row has ${wanted} cells but the rows below it have ${grid.width(misfit[0])}, so heads do not stand over their columns. Add the missing heads, or check the delimiter and the decimal mark.`,
    );
  }
  const trimmed = short.length >= 3 && short.length > 0.05 * layout.body.length;
  const rows = new Set([...long, ...(trimmed ? [] : short)]);
  const remarks = [...rows]
    .sort((a, b) => a - b)
    .slice(0, 20)
    .map((row) => `row ${row + 1} has ${grid.width(row)} cells under ${wanted} heads: its numbers are not taken`);
  if (rows.size > 20) remarks.push(`${rows.size - 20} more rows have too many or too few cells: their numbers are not taken`);
  if (trimmed)
    remarks.push(
      `${short.length} rows end before the last head: taken as empty cells left off (rows ${short
        .slice(0, 20)
        .map((row) => row + 1)
        .join(', ')}${short.length > 20 ? ' …' : ''})`,
    );
  return { withheld: { rows, columns: new Set() }, remarks, body: layout.body };
}

/** The short rows, if all are short by the same number of cells: then it is rather the head row that has one too many. */
function sameWidth(grid: DelimitedGrid, short: readonly number[]): readonly number[] {
  return short.every((row) => grid.width(row) === grid.width(short[0])) ? short : [];
}

function hasMore(grid: DelimitedGrid, row: number, from: number): boolean {
  for (let column = from; column < grid.width(row); column++) if (grid.look(row, column) !== cellLook.empty) return true;
  return false;
}

/** The same where samples stand in columns: a row of the file is an analyte, and one of another width has its values under wrong samples. */
function unevenAnalytes(grid: DelimitedGrid, { body }: Layout): Uneven {
  const rows = Array.from({ length: grid.rows }, (_, row) => row).filter((row) => body.some((column) => grid.look(row, column) === cellLook.number));
  const counts = new Map<number, number>();
  for (const row of rows) counts.set(grid.width(row), (counts.get(grid.width(row)) ?? 0) + 1);
  const usual = [...counts].reduce((best, each) => (each[1] > best[1] ? each : best), [0, 0])[0];
  const short = rows.filter((row) => grid.width(row) < usual);
  const long = rows.filter((row) => grid.width(row) > usual && hasMore(grid, row, usual));
  const trimmed = short.length >= 3 && short.length > 0.05 * rows.length;
  const columns = new Set([...long, ...(trimmed ? [] : short)]);
  const remarks = [...columns].map((row) => `row ${row + 1} has ${grid.width(row)} cells, the other rows ${usual}: its numbers are not taken`);
  if (trimmed)
    remarks.push(
      `${short.length} rows end before the last sample: taken as empty cells left off (rows ${short
        .slice(0, 20)
        .map((row) => row + 1)
        .join(', ')})`,
    );
  // What stands beyond the usual width belongs to the long rows, and is no sample.
  return { withheld: { rows: new Set(), columns }, remarks, body: body.filter((column) => column < usual) };
}
