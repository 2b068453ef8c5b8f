import { escapeSpreadsheet, withoutZipTimes, writeWhole, type TableCell } from '../display';
import { writeLineageBeside } from '../suite';
import { findSource, formatSource } from '../tables';
import { checkSave, type SavedScreen } from './export-csv';
import { exportTable } from './export-columns';
import type { FertilityScreen } from './screen';
import { conditionsText, type FertilityIndicator } from './tables';
import { furtherText, ranksText, shareText, weightedCriteria } from './view';

interface StyledCell {
  readonly value?: string | number | boolean;
  readonly fontWeight?: 'bold';
  readonly backgroundColor?: string;
  readonly textColor?: string;
  readonly bottomBorderColor?: string;
  readonly bottomBorderStyle?: 'thin';
  readonly textDecoration?: { readonly strikethrough: true };
  readonly wrap?: boolean;
  readonly align?: 'right' | 'center';
  readonly alignVertical?: 'top';
  readonly format?: string;
  /** Of the whole row, in points. */
  readonly height?: number;
}

type Cell = StyledCell | null;

interface Sheet {
  readonly sheet: string;
  readonly data: Cell[][];
  readonly columns: { readonly width: number }[];
  readonly stickyRowsCount: number;
  readonly orientation: 'landscape';
}

/** The part of the writer that is used; it is loaded when the first workbook is asked for. */
type WriteWorkbook = (
  sheets: readonly Sheet[],
  options: { readonly fontFamily: string; readonly fontSize: number; readonly features: readonly object[] },
) => { toBuffer(): Promise<Buffer> };

/** Prints every sheet as wide as a page, however many columns it has. */
const fitPageWidth = {
  files: {
    transform: {
      'xl/worksheets/sheet{id}.xml': {
        transform: (content: string) =>
          content
            .replace('<sheetViews>', '<sheetPr><pageSetUpPr fitToPage="1"/></sheetPr><sheetViews>')
            .replace('<pageSetup ', '<pageSetup fitToWidth="1" fitToHeight="0" '),
      },
    },
  },
};

/** Ground of a verdict cell: tints of colours that colour-blind readers tell apart. */
const verdictTint: Readonly<Record<string, string>> = {
  supported: '#BFE3D3',
  undecided: '#FBE7B0',
  'not supported': '#E3E3E3',
  'cannot be asked': '#FFFFFF',
};

/** Rows beyond this make a workbook that is slow to open; the CSV holds them all. */
const mostSampleRows = 20_000;

/**
 * Writes a screening as an Excel workbook: the sheets Verdicts, Evidence, Samples, Cautions and Sources. Struck-out verdicts are struck
 * through. Texts that a spreadsheet would take for a formula are made inert. The file is written whole or not at all.
 *
 * @param screen what `screenFertility` returned
 * @param path file name ending in .xlsx
 * @param options `samples`: whether the sheet Samples is written (default: up to 20,000 samples)
 * @returns the path and the number of groups
 * @throws RangeError for another ending; the system's own error when the file cannot be written
 * @example await saveFertilityWorkbook(screen, 'screening.xlsx')
 */
export async function saveFertilityWorkbook(
  screen: FertilityScreen,
  path: string,
  options: { readonly samples?: boolean } = {},
): Promise<SavedScreen> {
  checkSave('saveFertilityWorkbook', path, '.xlsx', 'groups');
  const { samples = screen.suite.size <= mostSampleRows } = options;
  if (typeof samples !== 'boolean') throw new RangeError(`saveFertilityWorkbook: samples must be true or false, not "${String(samples)}".`);
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const write = (require('write-excel-file/node') as { default: WriteWorkbook }).default;
  const sheets = [verdictSheet(screen), evidenceSheet(screen), ...(samples ? [sampleSheet(screen)] : []), cautionSheet(screen), sourceSheet(screen)];
  writeWhole(path, withoutZipTimes(await write(sheets, { fontFamily: 'Arial', fontSize: 10, features: [fitPageWidth] }).toBuffer()));
  writeLineageBeside(path, screen.lineage);
  return { path, rows: screen.groups.length };
}

function cell(value: TableCell, style: Omit<StyledCell, 'value'> = {}): Cell {
  if (value === null || value === undefined || value === '' || (typeof value === 'number' && !Number.isFinite(value))) return null;
  return { value: typeof value === 'string' ? escapeSpreadsheet(value) : value, ...style };
}

/** Rows with wrapped texts are given their height, because not every program works it out on opening. */
function withHeights(rows: readonly (readonly Cell[])[], widths: readonly number[]): Cell[][] {
  return rows.map((row) => {
    const lines = row.reduce(
      (most, each, j) => (each?.wrap === true ? Math.max(most, Math.ceil((String(each.value ?? '').length * 1.15) / widths[j])) : most),
      1,
    );
    return row.map((each, j) => (lines > 1 && j === row.findIndex((other) => other !== null) ? { ...each, height: 13 * lines + 2 } : each));
  });
}

const heads = (texts: readonly string[]): Cell[] =>
  texts.map((text) =>
    cell(text, {
      fontWeight: 'bold',
      backgroundColor: '#EEF1F4',
      bottomBorderColor: '#888888',
      bottomBorderStyle: 'thin',
      wrap: true,
      alignVertical: 'top',
    }),
  );

function sheet(name: string, widths: readonly number[], head: readonly string[], rows: readonly (readonly Cell[])[]): Sheet {
  return {
    sheet: name,
    data: withHeights([heads(head), ...rows], widths),
    columns: widths.map((width) => ({ width })),
    stickyRowsCount: 1,
    orientation: 'landscape',
  };
}

const share = { format: '0.00', alignVertical: 'top' } as const;
const wrapped = { wrap: true, alignVertical: 'top' } as const;
const top = { alignVertical: 'top', align: 'center' } as const;

function verdictSheet(screen: FertilityScreen): Sheet {
  const criteria = weightedCriteria(screen);
  return sheet(
    'Verdicts',
    [6, 22, 16, 8, 8, 8, 9, 8, 9, 8, ...criteria.map(() => 15), 16, 12, 44, 44],
    [
      'Rank',
      screen.label,
      'Verdict',
      'Score',
      '95 % from',
      'to',
      'Samples',
      'Asked',
      'Struck out',
      'Left out',
      ...criteria.map(({ name }) => name),
      'Lines of evidence',
      'Rank if weights vary',
      'Why',
      'Smallest further measurement',
    ],
    screen.groups.map((group) => [
      cell(group.rank, top),
      cell(group.group, { ...wrapped, fontWeight: 'bold' }),
      cell(group.verdict, { ...wrapped, backgroundColor: verdictTint[group.verdict] }),
      cell(group.score, share),
      cell(group.low, share),
      cell(group.high, share),
      cell(group.samples, top),
      cell(group.asked, top),
      cell(group.struckOut, top),
      cell(group.leftOut, top),
      ...criteria.map(({ at }) => cell(shareText(group, at), { ...wrapped, align: 'center' })),
      cell(group.agreement, wrapped),
      cell(ranksText(group), top),
      cell(group.because, wrapped),
      cell(furtherText(group), wrapped),
    ]),
  );
}

function indicatorOf(screen: FertilityScreen, key: string): FertilityIndicator {
  return screen.answers.find(({ indicator }) => indicator.key === key)!.indicator;
}

/** A row of the evidence sheet that gives a value with its range, and no counts. */
function readingRow(group: string, name: string, family: string, samples: number, values: readonly number[], reading: string): Cell[] {
  const numbers = values.map((value) => cell(value, { format: '0.00' }));
  return [cell(group), cell(name), cell(family), null, null, null, null, cell(samples), ...numbers, null, null, null, cell(reading)];
}

function evidenceSheet(screen: FertilityScreen): Sheet {
  const criteria = screen.answers.filter(({ indicator }) => indicator.kind === 'criterion');
  const rows = screen.groups.flatMap((group) => [
    ...group.tallies.map(({ met, near, notMet, asked, share: part, low, high, guarded, notApplicable, notMeasured }, k) => {
      const { indicator } = criteria[k];
      return [
        cell(group.group),
        cell(indicator.name),
        cell(indicator.family),
        cell(screen.weights[indicator.key]),
        cell(met),
        cell(near),
        cell(notMet),
        cell(asked),
        cell(part, { format: '0.00' }),
        cell(asked === 0 ? null : low, { format: '0.00' }),
        cell(asked === 0 ? null : high, { format: '0.00' }),
        cell(notApplicable - guarded),
        cell(guarded),
        cell(notMeasured),
        null,
      ];
    }),
    ...group.values.map(({ indicator, samples, median, lowerQuartile, upperQuartile }) => {
      const of = indicatorOf(screen, indicator);
      return readingRow(
        group.group,
        `${of.expression}, median and quartiles`,
        of.family,
        samples,
        [median, lowerQuartile, upperQuartile],
        'value, no verdict',
      );
    }),
    ...group.trends.map(({ indicator, samples, correlation, low, high, reading }) => {
      const of = indicatorOf(screen, indicator);
      return readingRow(group.group, `${of.name}, correlation`, of.family, samples, [correlation, low, high], reading);
    }),
  ]);
  return sheet(
    'Evidence',
    [22, 34, 10, 8, 7, 7, 8, 8, 9, 9, 9, 13, 10, 13, 40],
    [
      screen.label,
      'Indicator',
      'Family',
      'Weight',
      'Met',
      'Near',
      'Not met',
      'Asked',
      'Share or value',
      '95 % or quartile from',
      'to',
      'Not applicable',
      'Guarded',
      'Not measured',
      'Reading',
    ],
    rows,
  );
}

function sampleSheet(screen: FertilityScreen): Sheet {
  const { rows, columns } = exportTable(screen, 'samples');
  // The caution stands on its own sheet here, not in every row.
  const shown = columns.filter(({ head }) => head !== 'caution');
  const data = Array.from({ length: rows }, (_, row) =>
    shown.map(({ at }): Cell => {
      const value = at(row);
      return typeof value === 'string' && value.startsWith('struck out')
        ? cell(value, { textDecoration: { strikethrough: true }, textColor: '#777777' })
        : cell(value);
    }),
  );
  return sheet(
    'Samples',
    shown.map((_, j) => (j < 3 ? 16 : 14)),
    shown.map(({ head }) => head),
    data,
  );
}

function cautionSheet(screen: FertilityScreen): Sheet {
  return sheet(
    'Cautions',
    [120],
    ['Read these with every verdict'],
    screen.cautions.map((text) => [cell(text, wrapped)]),
  );
}

function sourceSheet(screen: FertilityScreen): Sheet {
  const rows = [
    ...screen.answers.map(({ indicator }) => [
      cell(indicator.name, wrapped),
      cell(conditionsText(indicator) || indicator.expression, wrapped),
      cell(windowText(indicator.silica, indicator.window), wrapped),
      cell(indicator.limits, wrapped),
      cell(formatSource(indicator.source), wrapped),
      cell(indicator.standing, wrapped),
    ]),
    ...screen.guards.map(({ guard }) => [
      cell(`Guard: ${guard.name}`, wrapped),
      cell(conditionsText(guard) || `label ${guard.label ?? ''}`, wrapped),
      null,
      cell(guard.note, wrapped),
      cell(guard.source === '' ? 'common practice' : formatSource(guard.source), wrapped),
      cell(guard.standing, wrapped),
    ]),
    ...screen.sources
      .filter((key) => findSource(key).type === 'dataset')
      .map((key) => [
        cell('Labelled districts', wrapped),
        null,
        null,
        cell(findSource(key).note ?? '', wrapped),
        cell(formatSource(key), wrapped),
        null,
      ]),
  ];
  return sheet('Sources', [28, 40, 18, 60, 60, 14], ['Indicator', 'Conditions', 'Silica window (wt %)', 'Limits of use', 'Source', 'Standing'], rows);
}

function windowText({ over, from, below, to }: FertilityScreen['answers'][number]['indicator']['silica'], basis: string): string {
  const parts = [
    over === undefined ? '' : `over ${over}`,
    from === undefined ? '' : `from ${from}`,
    below === undefined ? '' : `below ${below}`,
    to === undefined ? '' : `to ${to}`,
  ].filter((text) => text !== '');
  return parts.length === 0 ? 'any' : `${parts.join(', ')} (${basis})`;
}
