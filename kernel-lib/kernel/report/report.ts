import { showAs, writeWhole, type Showable } from '../../display';
import { cellState, joinLineages, Suite, type Column, type Traced } from '../../suite';
import { blocksOfBundle, tableBlock, type Block, type TableBlock } from './blocks';
import { closingBlocks } from './closing';
import { reportPage } from './page';
import { reportPdf } from './pdf';
import { workbookBytes, type WorkbookSheet } from './workbook';

/** A result that can stand in a report. */
export type ReportResult = Traced & Showable;

/** What goes into a report, in the order in which it is printed. */
export interface ReportParts {
  readonly title: string;
  /** A few sentences in Markdown, or labelled lines. */
  readonly summary?: string | Readonly<Record<string, string | number>>;
  /** Diagrams, in order. */
  readonly figures?: readonly ReportResult[];
  /** Result tables by heading: suites, verdicts, ratios, rankings … */
  readonly tables?: Readonly<Record<string, ReportResult>>;
  /** Import report and laboratory quality control, by heading. */
  readonly quality?: Readonly<Record<string, ReportResult>>;
  /** Cautions of this study, added to those that always hold. */
  readonly cautions?: readonly string[];
}

/** A finished report. Shows as its list of contents; `saveReport` writes it. */
export interface Report extends Traced, Showable {
  readonly title: string;
  readonly blocks: readonly Block[];
  /** Whole tables, for the workbook: long ones are cut in the report, not there. */
  readonly sheets: readonly WorkbookSheet[];
}

/**
 * Puts results together as a report that needs no notebook: summary, figures, tables, quality control, cautions, methods, sources, values
 * to be checked, lineage.
 *
 * @param parts `title`; `summary` (Markdown text or labelled lines); `figures`; `tables`, `quality` (by heading); `cautions`
 * @returns a report to save with `saveReport` as .html, .pdf or .xlsx
 * @throws TypeError for a part that is not a result of this library
 * @example await saveReport(await report({ title: 'Oruvai Arc', tables: { Analyses: suite } }), 'results/report.html')
 */
export async function report(parts: ReportParts): Promise<Report> {
  if (typeof parts !== 'object' || parts === null || typeof parts.title !== 'string' || parts.title.trim() === '') {
    throw new TypeError("report takes an object with a title and results, such as { title: 'Oruvai Arc', tables: { Names: names } }.");
  }
  const { title, summary, figures = [], tables = {}, quality = {}, cautions = [] } = parts;
  if (!Array.isArray(figures)) throw new TypeError('report: figures is a list of diagrams.');
  const all: [string, ReportResult][] = [...figures.map((figure, i): [string, ReportResult] => [`figures[${i}]`, figure]), ...Object.entries(tables), ...Object.entries(quality)];
  for (const [name, result] of all) {
    if (typeof result?.toMimeBundle !== 'function' || !Array.isArray(result.lineage)) throw new TypeError(`report: "${name}" is not a result of this library (it has no lineage, or cannot be shown).`);
  }
  const blocks: Block[] = [];
  const heading = (text: string, level: 2 | 3 = 2) => blocks.push({ kind: 'heading', level, text });
  if (summary !== undefined) {
    heading('Summary');
    blocks.push(typeof summary === 'string' ? { kind: 'text', markdown: summary } : tableBlock('', ['what', 'value'], Object.entries(summary)));
  }
  if (figures.length > 0) heading('Figures');
  for (const figure of figures) blocks.push(...blocksOfBundle(await figure.toMimeBundle()));
  for (const [section, results] of [['Results', tables], ['Quality control', quality]] as const) {
    if (Object.keys(results).length === 0) continue;
    heading(section);
    for (const [name, result] of Object.entries(results)) {
      heading(name, 3);
      blocks.push(...blocksOfBundle(await result.toMimeBundle()));
    }
  }
  const lineage = joinLineages(...all.map(([, result]) => result.lineage));
  const closing = closingBlocks(lineage, { cautions });
  const sheets = [
    ...(await sheetsOf(tables)),
    { name: 'Quality control', tables: await wholeTables(Object.entries(quality)) },
    ...['Methods', 'Sources', 'Lineage'].map((name): WorkbookSheet => ({ name, tables: closingTable(closing, name) })),
  ].filter((sheet) => sheet.tables.length > 0);
  const made = { title, blocks: [...blocks, ...closing], sheets, lineage };
  return showAs(made, () => ({
    title: `Report "${title}"`,
    columns: ['part', 'what'],
    rows: made.blocks.filter((block) => block.kind !== 'text' && block.kind !== 'printed').map((block) => [block.kind, block.kind === 'heading' ? block.text : block.kind === 'figure' ? block.described : block.title]),
    notes: ['Save it with saveReport(report, "name.html"), ".pdf" or ".xlsx".'],
  }));
}

const sheetsOf = (tables: Readonly<Record<string, ReportResult>>): Promise<WorkbookSheet[]> =>
  Promise.all(Object.entries(tables).map(async ([name, result]) => ({ name, tables: await wholeTables([[name, result]]) })));

/** Tables with all their rows where the result holds columns, as they are shown where it does not. */
async function wholeTables(results: readonly (readonly [string, ReportResult])[]): Promise<TableBlock[]> {
  const found = await Promise.all(results.map(async ([name, result]) => wholeTable(name, result) ?? blocksOfBundle(await result.toMimeBundle()).filter((block) => block.kind === 'table')));
  return found.flat();
}

function wholeTable(name: string, result: ReportResult): TableBlock | undefined {
  if (result instanceof Suite) return columnsTable(name, [...result.labels], [...result.columns.values()], result.size);
  const { samples, columns } = result as { samples?: unknown; columns?: unknown };
  if (!Array.isArray(samples) || !(columns instanceof Map)) return undefined;
  return columnsTable(name, [['sample', samples as string[]]], [...(columns as Map<string, Column>).values()], samples.length);
}

function columnsTable(name: string, labels: readonly (readonly [string, readonly string[]])[], columns: readonly Column[], size: number): TableBlock {
  const heads = [...labels.map(([label]) => label), ...columns.map(({ symbol, unit }) => (unit === '' ? symbol : `${symbol} (${unit})`))];
  const rows = Array.from({ length: size }, (_, i) => [...labels.map(([, texts]) => texts[i]), ...columns.map((each) => cellText(each, i))]);
  return { kind: 'table', title: name, columns: heads, rows, notes: [] };
}

function cellText({ values, states, limits }: Column, i: number): string {
  if (states[i] === cellState.belowDetection) return `<${limits?.[i] ?? ''}`;
  if (states[i] === cellState.aboveRange) return `>${limits?.[i] ?? ''}`;
  return Number.isFinite(values[i]) ? String(Number(values[i].toPrecision(9))) : '';
}

/** A closing part of the report as rows of a sheet. */
function closingTable(blocks: readonly Block[], section: string): TableBlock[] {
  const from = blocks.findIndex((block) => block.kind === 'heading' && block.text === section);
  if (from < 0) return [];
  const end = blocks.findIndex((block, i) => i > from && block.kind === 'heading');
  return blocks.slice(from + 1, end < 0 ? undefined : end).flatMap((block): TableBlock[] => {
    if (block.kind === 'table') return [block];
    if (block.kind !== 'text') return [];
    const lines = block.markdown.split('\n').map((line) => [line.replace(/^- /, '').replace(/\\([\\`*_[\]<>#|~])/g, '$1')]);
    return [{ kind: 'table', title: section, columns: [section], rows: lines, notes: [] }];
  });
}

/**
 * Writes a report: `.html` (one self-contained page), `.pdf` (A4), or `.xlsx` (a sheet for each result, and for quality control, methods,
 * sources, lineage). The file is written whole or not at all.
 *
 * @param made what `report` returned
 * @param path where to; its ending chooses the kind
 * @returns the path
 * @throws RangeError for another ending; the system's own error when the file cannot be written
 * @example await saveReport(made, 'results/report.pdf')
 */
export async function saveReport(made: Report, path: string): Promise<string> {
  if (!Array.isArray(made?.blocks)) throw new TypeError('saveReport takes what report() returned, and a path. Did you forget to await the report?');
  if (typeof path !== 'string' || !/\.(html|pdf|xlsx)$/.test(path)) throw new RangeError(`saveReport: the path must end in .html, .pdf or .xlsx, not "${String(path)}".`);
  if (path.endsWith('.html')) writeWhole(path, reportPage(made.title, made.blocks));
  else if (path.endsWith('.pdf')) writeWhole(path, await reportPdf(made.title, made.blocks));
  else if (made.sheets.length === 0) throw new RangeError('saveReport: this report holds no tables for a workbook. Give report() some tables, or save it as .html or .pdf.');
  else writeWhole(path, await workbookBytes(made.sheets));
  return path;
}
