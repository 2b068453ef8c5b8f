import type { TableCell } from '../display';
import { fertilityReasonNames, fertilityVerdictNames } from './codes';
import { shortCaution, standingCautions } from './cautions';
import type { FertilityScreen } from './screen';
import { furtherText, ranksText, verdictText } from './view';

/** What the rows of a file are: one a group (default), or one a sample. */
export type FertilityRows = 'groups' | 'samples';

/** @internal One column of a file to be written: its head, and the cell of each row. */
export interface ExportColumn {
  readonly head: string;
  readonly at: (row: number) => TableCell;
}

/** @internal A table to be written, by column. */
export interface ExportTable {
  readonly rows: number;
  readonly columns: readonly ExportColumn[];
}

const powers = [1, 10, 100, 1e3, 1e4, 1e5, 1e6];
const rounded = (value: number, digits: number): number | null =>
  Number.isFinite(value) ? Math.round(value * powers[digits]) / powers[digits] : null;

/** @internal The table of groups, or of samples. */
export function exportTable(screen: FertilityScreen, rows: FertilityRows): ExportTable {
  const table = rows === 'groups' ? groupTable(screen) : sampleTable(screen);
  // The user's label may bear the name of one of our columns: the second of a name is numbered, so that none is lost.
  const times = new Map<string, number>();
  const columns = table.columns.map((column) => {
    const seen = (times.get(column.head) ?? 0) + 1;
    times.set(column.head, seen);
    return seen === 1 ? column : { ...column, head: `${column.head} (${seen})` };
  });
  return { rows: table.rows, columns };
}

function groupTable(screen: FertilityScreen): ExportTable {
  const { groups } = screen;
  const column = (head: string, of: (group: (typeof groups)[number]) => TableCell): ExportColumn => ({ head, at: (row) => of(groups[row]) });
  const criteria = screen.answers
    .filter(({ indicator }) => indicator.kind === 'criterion')
    .flatMap(({ indicator: { key } }, k) => [
      column(`${key} met`, ({ tallies }) => tallies[k].met),
      column(`${key} near`, ({ tallies }) => tallies[k].near),
      column(`${key} asked`, ({ tallies }) => tallies[k].asked),
      column(`${key} low`, ({ tallies }) => (tallies[k].asked === 0 ? null : rounded(tallies[k].low, 4))),
      column(`${key} high`, ({ tallies }) => (tallies[k].asked === 0 ? null : rounded(tallies[k].high, 4))),
    ]);
  const values = (groups[0]?.values ?? []).flatMap(({ indicator }, k) => [
    column(`${indicator} median`, (group) => rounded(group.values[k].median, 4)),
    column(`${indicator} n`, (group) => group.values[k].samples),
  ]);
  const trends = (groups[0]?.trends ?? []).map(({ indicator }, k) => column(indicator, (group) => group.trends[k].reading));
  return {
    rows: groups.length,
    columns: [
      column('rank', ({ rank }) => rank),
      column(screen.label, ({ group }) => group),
      column('verdict', ({ verdict }) => verdict),
      column('because', ({ because }) => because),
      column('score', ({ score }) => rounded(score, 4)),
      column('score low', ({ low }) => rounded(low, 4)),
      column('score high', ({ high }) => rounded(high, 4)),
      column('samples', ({ samples }) => samples),
      column('asked', ({ asked }) => asked),
      column('struck out', ({ struckOut }) => struckOut),
      column('left out', ({ leftOut }) => leftOut),
      column('lines of evidence', ({ agreement }) => agreement),
      column('rank if weights vary', ranksText),
      column('share of draws among first', ({ ranks }) => rounded(ranks.amongFirst, 3)),
      column('smallest further measurement', furtherText),
      ...criteria,
      ...values,
      ...trends,
      // 1e-6 degrees is 0.1 m on the ground.
      column('latitude', ({ latitude }) => rounded(latitude, 6)),
      column('longitude', ({ longitude }) => rounded(longitude, 6)),
      column('check on labelled districts', () => screen.calibration.statement),
      column('caution', () => standingCautions.join(' ')),
    ],
  };
}

function sampleTable(screen: FertilityScreen): ExportTable {
  const { suite, answers, guards } = screen;
  const label = suite.label(screen.label);
  const byName = new Map(screen.groups.map((group) => [group.group, group]));
  // Every pair of codes has one text, made once and not once a sample.
  const texts = new Map<number, string>();
  const verdictOf = (verdict: number, reason: number, withoutGuards: number): string => {
    const code = (verdict * 16 + reason) * 8 + withoutGuards;
    let text = texts.get(code);
    if (text === undefined)
      texts.set(
        code,
        (text =
          verdictText(verdict, reason, withoutGuards) +
          (verdict > 2 && fertilityReasonNames[reason] !== fertilityVerdictNames[verdict] ? ` – ${fertilityReasonNames[reason]}` : '')),
      );
    return text;
  };
  const criteria = answers
    .filter(({ indicator }) => indicator.kind === 'criterion')
    .map(
      ({ indicator, verdicts, reasons, withoutGuards }): ExportColumn => ({
        head: indicator.key,
        at: (row) => verdictOf(verdicts[row], reasons[row], withoutGuards[row]),
      }),
    );
  const seen = new Set<string>();
  const values = answers.flatMap(({ indicator, values: column }): ExportColumn[] => {
    if (column === undefined || indicator.kind === 'trend' || seen.has(indicator.expression)) return [];
    seen.add(indicator.expression);
    return [{ head: indicator.expression, at: (row) => rounded(column.values[row], 4) }];
  });
  const position = (symbol: string): ExportColumn[] => {
    const column = suite.columns.get(symbol);
    return column === undefined ? [] : [{ head: symbol, at: (row) => rounded(column.values[row], 6) }];
  };
  return {
    rows: suite.size,
    columns: [
      { head: 'sample', at: (row) => suite.samples[row] },
      { head: screen.label, at: (row) => label[row] },
      { head: `${screen.label} verdict`, at: (row) => byName.get(label[row])?.verdict ?? '' },
      { head: `${screen.label} rank`, at: (row) => byName.get(label[row])?.rank ?? null },
      { head: 'flags', at: (row) => flagsOf(guards, row) },
      ...criteria,
      ...values,
      ...position('latitude'),
      ...position('longitude'),
      { head: 'caution', at: () => shortCaution },
    ],
  };
}

function flagsOf(guards: FertilityScreen['guards'], row: number): string {
  let text = '';
  for (const { guard, flags } of guards) if (flags[row] === 1) text += `${text === '' ? '' : '; '}${guard.name}`;
  return text;
}
