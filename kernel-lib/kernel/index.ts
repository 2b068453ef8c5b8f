/**
 * kernel/: runs notebooks: rich display of values, progress lines, the headless runner and its HTML pages, the Jupyter kernel. What runs
 * cells (engine/) lives in processes of its own and is not loaded by the library.
 */
export { progress, type TaskProgress } from './progress';
export { show } from './show';
export { runSummary, type RunSummary } from './run-summary';
export { runNotebook, type NotebookRun, type RunEvent, type RunFailure, type RunOptions } from './notebook/run';
export { notebookHtml, type HtmlOptions } from './notebook/html';
export { NotebookFormatError, type Notebook, type NotebookCell, type NotebookOutput } from './notebook/document';
export type { ParameterValue } from './notebook/parameters';
export { verifyRun, type Change, type Verification, type VerifyOptions } from './record/verify';
export { RunRecordError } from './record/run-record';
export type { ValueDifference } from './record/compare-outputs';
export type { RunFacts } from './record/run-facts';
export { report, saveReport, type Report, type ReportParts, type ReportResult } from './report/report';
export type { Block, CodeBlock, FigureBlock, HeadingBlock, TableBlock, TextBlock } from './report/blocks';
export type { WorkbookSheet } from './report/workbook';
export { runOverSheets, type ManyOptions, type ManyRuns, type SheetRun } from './notebook/run-many';
