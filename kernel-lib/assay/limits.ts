/** Sizes past which a file is refused before it can exhaust the machine. Far above any real assay sheet. */
export const sizeLimits = {
  /** Bytes of a file on disk. */
  fileBytes: 600 * 1024 * 1024,
  /** Bytes of one row of a text file. */
  rowBytes: 2 * 1024 * 1024,
  /** Columns of a sheet. */
  columns: 10_000,
  /** Cells of one workbook. */
  workbookCells: 20_000_000,
  /** Bytes of a workbook once unpacked, and how many times its packed size that may be. */
  unpackedBytes: 400 * 1024 * 1024,
  unpackedRatio: 200,
  /** Parts of a workbook file. */
  parts: 5_000,
} as const;
