/** assay/: spreadsheets in (layout, headers, units, detection limits), the import report, and sheets out again. */
export { AssayError } from './errors';
export type { ColumnSetting } from './plan-columns';
export { readAssays, type Assays } from './read-assays';
export type { ReadAssaysOptions } from './read-options';
export { writeImportReport, type ImportedColumn, type ImportReport, type SheetSummary } from './report';
export * from './sheet-grids';
export { writeAssays } from './write-assays';
export { writeTable, type TableColumn, type TableLabels } from './write-table';
export * from './quality';
