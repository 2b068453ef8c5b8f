import { showAs, tableBundle, type Showable, type TableCell } from '../display';

/** The private type by which the runner finds a run's summary among the outputs. */
export const summaryType = 'application/vnd.wedgework.summary+json';

/** The short account of a run that the command line prints: labelled lines in order. */
export interface RunSummary extends Showable {
  readonly title: string;
  readonly lines: Readonly<Record<string, string | number>>;
}

/**
 * The short account of a notebook's run. As the last value of a cell it shows as a small table, and the command-line runner prints it
 * when the notebook is done.
 *
 * @param lines what to say, by label, in order: texts or numbers
 * @param options `title` (default `Summary`)
 * @returns a value to leave as the last one of a cell
 * @throws TypeError when `lines` is not an object of texts and numbers
 * @example ww.runSummary({ 'Rows read': 54, 'Rocks named': '52 of 54' })
 */
export function runSummary(lines: Readonly<Record<string, string | number>>, options: { readonly title?: string } = {}): RunSummary {
  if (typeof lines !== 'object' || lines === null || Array.isArray(lines)) {
    throw new TypeError("runSummary takes an object of labelled lines, such as { 'Rows read': 54 }.");
  }
  for (const [label, value] of Object.entries(lines)) {
    if (typeof value !== 'string' && typeof value !== 'number') {
      throw new TypeError(`runSummary: the line "${label}" must be a text or a number, not ${value === null ? 'null' : typeof value}.`);
    }
  }
  const { title = 'Summary' } = options;
  return showAs({ title, lines: { ...lines } }, (summary) => ({
    ...tableBundle({ title: summary.title, columns: ['What', 'Value'], rows: Object.entries(summary.lines).map((line): TableCell[] => line) }),
    [summaryType]: { title: summary.title, lines: Object.entries(summary.lines) },
  }));
}
