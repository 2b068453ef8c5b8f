import { findAnalyte } from '../chemistry';
import { showAs, type Showable } from '../display';
import { totalIron, type TotalIronCounts } from '../recast';
import { step, suiteOf, type Column, type StepDetail, type Suite, type Traced } from '../suite';
import { AssayError } from './errors';
import { joinSheet, matchSamples, rowsBelow, type Joined, type RowMatch } from './join-sheets';
import { findLayouts, type Layout } from './layout';
import { openFile, type OpenFile, type OpenSheet } from './open-file';
import { checkReadOptions, type ReadAssaysOptions } from './read-options';
import { readSheet, type ReadSheet } from './read-sheet';
import { reportView, type ImportReport } from './report';

/** What `readAssays` gives; a notebook shows it as the import report. */
export interface Assays extends Traced, Showable {
  readonly suite: Suite;
  readonly report: ImportReport & Showable;
}

/**
 * Reads an assay sheet: .csv, .tsv (any delimiter and common encoding), .xlsx, .xls, .ods.
 *
 * Oxides become wt %, elements ppm; isotope ratios stay bare numbers; what is not an analyte becomes a text label. Below-detection and
 * above-range cells keep their limit and hold no number; a cell that cannot be read is missing, and listed with its address. Total iron
 * (`FeOT`) is completed row by row: a reported total wins, `FeO` and `Fe2O3` both measured are summed, one of them alone is taken as total
 * and counted as such. Sheets of a workbook that hold more of the same samples are joined by sample name.
 *
 * @param path of the file, from the notebook's folder
 * @param options see `ReadAssaysOptions`; `columns: { 'Zr XRF': 'ignore', 'Au': { unit: 'ppb' } }` settles single columns
 * @returns `suite` (n samples), `report` (what every column became, what was inferred, left out, and should be checked), `lineage`
 * @throws AssayError for a file that cannot be opened or understood; RangeError for an unknown option
 * @example const { suite, report } = await readAssays('data/oruvai-arc.xlsx')
 */
export async function readAssays(path: string, options: ReadAssaysOptions = {}): Promise<Assays> {
  checkReadOptions(path, options);
  const opened = await openFile(path, { delimiter: options.delimiter });
  const headerRow = options.headerRow === undefined ? undefined : options.headerRow - 1;
  const sheets = opened.sheets.flatMap((sheet) =>
    tablesOf(sheet, findLayouts(sheet.grid, { samplesIn: options.samplesIn, headerRow, settings: options.columns })),
  );
  const { read, whole, remarks } = readSheets(opened, sheets, options);
  const noAnalyte = read.every(({ decoded }) =>
    decoded.imported.every(({ became, name }) => became !== 'analyte' && findAnalyte(name) === undefined),
  );
  const pleaseCheck = [
    ...(noAnalyte ? ['no column names an analyte'] : []),
    ...read.flatMap((each) => each.pleaseCheck),
    ...whole.remarks,
    ...remarks,
  ];
  let { columns } = whole;
  let iron: TotalIronCounts | undefined;
  if (options.iron !== 'as-given' && columns.some(({ symbol }) => /^(FeOT|Fe2O3T|FeO|Fe2O3)$/.test(symbol))) {
    const total = totalIron(suiteOf({ columns, labels: whole.labels }));
    iron = total.counts;
    columns = withIron(columns, total.column);
    if (iron.ferricAlone + iron.ferrousAlone > 0)
      pleaseCheck.push(`total iron: ${iron.ferricAlone} rows have Fe2O3 alone and ${iron.ferrousAlone} FeO alone, taken as total iron`);
  }
  const first = read[0];
  const inferred = read.flatMap((each) => each.inferred);
  const report = showAs(
    {
      file: opened.file,
      sha256: opened.sha256,
      encoding: opened.encoding ?? '',
      delimiter: opened.delimiter ?? '',
      decimal: first.conventions.decimal,
      sheets: sheets.map(({ sheet, layout }) => ({ name: sheet.name, rows: sheet.grid.rows, columns: sheet.grid.columns, holds: holds(layout) })),
      sheetsRead: read.map(({ name }) => name),
      samplesIn: first.layout.samplesIn,
      rows: whole.labels.get('sample')?.length ?? columns[0].values.length,
      columns: read.flatMap(({ decoded }) => decoded.imported),
      sheetRows: first.layout.body.map((row) => row + 1),
      ...(iron === undefined ? {} : { iron }),
      inferred,
      ignored: read.flatMap((each) => each.ignored),
      pleaseCheck: [...inferred, ...pleaseCheck],
    } satisfies ImportReport,
    reportView,
  );
  const suite = suiteOf({ columns, labels: whole.labels, lineage: [lineageStep(report, read, options)] });
  return showAs({ suite, report, lineage: suite.lineage }, () => reportView(report));
}

function lineageStep(report: ImportReport, read: readonly ReadSheet[], options: ReadAssaysOptions) {
  const cells = report.columns.reduce((sum, each) => sum + each.below, 0);
  return step(
    'readAssays',
    {
      file: report.file,
      sha256: report.sha256,
      sheet: report.sheetsRead.join(' + '),
      encoding: report.encoding,
      delimiter: report.delimiter,
      decimal: report.decimal,
      samplesIn: report.samplesIn,
      headerRow: read[0].layout.header.analyte + 1,
      rows: report.rows,
      negative: read[0].conventions.negative,
      notDetermined: read[0].conventions.notDetermined,
      columns: report.columns.map(({ sheet, place, head, became, name, sheetUnit, factor }) => ({
        sheet,
        place,
        head,
        became,
        name,
        unit: sheetUnit,
        factor,
      })),
      inferred: report.inferred,
      settled: JSON.parse(JSON.stringify(options)) as StepDetail,
      ...(report.iron === undefined ? {} : { ironFound: { ...report.iron } }),
    },
    {
      tables: ['analyte-spellings.json', 'plausible-ranges.csv', 'atomic-weights.csv'],
      says: `${report.rows} analyses were read from ${report.file}; ${cells} results below detection were kept as such.`,
    },
  );
}

type LaidOut = { readonly sheet: OpenSheet; readonly layout: Layout | undefined };

/** The tables of a sheet, each as a sheet of its own: the first under the sheet's name, the others under that and their head row. */
function tablesOf(sheet: OpenSheet, layouts: readonly Layout[]): LaidOut[] {
  if (layouts.length === 0) return [{ sheet, layout: undefined }];
  return layouts.map((layout, at) => {
    const name = at === 0 ? sheet.name : `${sheet.name === '' ? 'table' : sheet.name} from row ${layout.header.analyte + 1}`;
    return {
      sheet: {
        ...sheet,
        name,
        remarks:
          at === 0 ? sheet.remarks : [`row ${layout.header.analyte + 1} names other analytes than the head row above it: read as a table of its own`],
      },
      layout,
    };
  });
}

/** Reads the chosen sheet, and joins the others that hold more of its samples. */
function readSheets(
  opened: OpenFile,
  sheets: readonly LaidOut[],
  options: ReadAssaysOptions,
): { read: ReadSheet[]; whole: Joined; remarks: string[] } {
  const sheetOptions = { ...options, columns: options.columns ?? {}, prefer: options.prefer ?? {}, unknown: options.unknown ?? ('labels' as const) };
  const used = new Set<string>();
  const chosen = chooseSheet(opened, sheets, options.sheet);
  const where = whereIs(opened, chosen.sheet);
  const first = readSheet(chosen.sheet, chosen.layout, sheetOptions, where, used);
  if (chosen.layout.body.length === 0)
    throw new AssayError(`${where}: there is a head row (row ${chosen.layout.header.analyte + 1}) but no samples below it.`);
  const read = [first];
  const remarks: string[] = [];
  let whole: Joined = { columns: first.decoded.columns, labels: first.decoded.labels, remarks: [] };
  for (const { sheet, layout } of sheets) {
    const below = sheet.grid === chosen.sheet.grid;
    if (sheet === chosen.sheet || layout === undefined || layout.body.length === 0 || (options.sheet !== undefined && !below)) continue;
    if (sheet.hidden && !below) {
      remarks.push(`the hidden sheet "${sheet.name}" (${holds(layout)}) is not read`);
      continue;
    }
    const next = readSheet(sheet, layout, sheetOptions, whereIs(opened, sheet), used);
    const names = next.decoded.labels.get('sample');
    const known = whole.labels.get('sample');
    let match: RowMatch = names === undefined || known === undefined ? { refused: 'it has no sample names' } : matchSamples(known, names);
    // A table below another in one sheet goes on with other samples.
    if ('refused' in match && below && names !== undefined && known !== undefined) match = rowsBelow(known, names);
    if ('refused' in match)
      remarks.push(`sheet "${sheet.name}" (${holds(layout)}) is not read: ${match.refused}. Read it with { sheet: '${sheet.name}' }`);
    else {
      whole = joinSheet(whole, next, match);
      read.push(next);
    }
  }
  const unused = Object.keys(sheetOptions.columns).find((name) => !used.has(name));
  if (unused !== undefined) {
    throw new AssayError(
      `${where}: columns: no column is headed "${unused}". The heads are: ${chosen.layout.heads.filter(Boolean).slice(0, 40).join(' | ')}.`,
    );
  }
  return { read, whole, remarks };
}

function chooseSheet(opened: OpenFile, sheets: readonly LaidOut[], wanted: string | undefined): { sheet: OpenSheet; layout: Layout } {
  const readable = sheets.filter(({ layout }) => layout !== undefined && layout.body.length > 0);
  const found =
    wanted === undefined
      ? (readable.find(({ sheet }) => !sheet.hidden) ?? readable[0] ?? sheets.find(({ layout }) => layout !== undefined))
      : sheets.find(({ sheet }) => sheet.name === wanted);
  if (found === undefined && wanted !== undefined) {
    throw new AssayError(
      `${opened.file} has no sheet "${wanted}". Its sheets: ${sheets.map(({ sheet, layout }) => `${sheet.name} (${holds(layout)})`).join(', ')}.`,
    );
  }
  if (found?.layout === undefined) {
    const empty = (found === undefined ? sheets : [found]).every(({ sheet }) => sheet.grid.rows === 0 || sheet.grid.columns === 0);
    throw new AssayError(
      empty
        ? `${opened.file}${wanted === undefined ? '' : `, sheet "${wanted}"`} holds no cells. Save the sheet again.`
        : `${opened.file}${wanted === undefined ? '' : `, sheet "${wanted}"`}: no head row was found: no row or column names analytes such as SiO2, "Ba (ppm)" or FeO*. Give headerRow, or columns: { 'head': 'SiO2' }.`,
    );
  }
  return { sheet: found.sheet, layout: found.layout };
}

function holds(layout: Layout | undefined): string {
  if (layout === undefined) return 'no analyses';
  return `${layout.body.length} samples in ${layout.samplesIn}, head ${layout.samplesIn === 'rows' ? 'row' : 'column'} ${layout.header.analyte + 1}`;
}

function whereIs(opened: OpenFile, sheet: OpenSheet): string {
  return sheet.name === '' ? opened.file : `${opened.file}, sheet "${sheet.name}"`;
}

/** The columns with the completed FeOT in the place of the one that was there, else at the end. */
function withIron(columns: readonly Column[], iron: Column): Column[] {
  return columns.some(({ symbol }) => symbol === 'FeOT') ? columns.map((each) => (each.symbol === 'FeOT' ? iron : each)) : [...columns, iron];
}
