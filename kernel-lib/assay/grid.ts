/** What a cell looks like at first sight: enough to decode most cells without making a text of them. */
export const cellLook = { empty: 0, number: 1, below: 2, text: 3 } as const;

/**
 * A sheet as rows × columns of cells, whatever the file it came from. Cells are looked at by `look`, which leaves the number of a plain
 * number (or of a `<number` cell) in `seen`: no object and no text is made for them.
 */
export interface Grid {
  readonly rows: number;
  /** Width of the widest row. */
  readonly columns: number;
  /** The number that the last `look` found. */
  readonly seen: number;
  /** One of `cellLook`; cells beyond the edge are empty. */
  look(row: number, column: number): number;
  /** The text of a cell without surrounding blanks; '' for an empty cell and beyond the edge. */
  text(row: number, column: number): string;
  /** How many cells the row has in the file, trailing empty ones included. */
  width(row: number): number;
}

/** What a workbook cell may hold once read: a text, a number, or nothing. */
export type RawCell = string | number | null | undefined;

const plainNumber = /^[-+]?(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?$/;

/** A grid over rows of cells in memory (workbooks). */
export class CellGrid implements Grid {
  readonly rows: number;
  readonly columns: number;
  seen = NaN;

  constructor(private readonly cells: readonly (readonly RawCell[])[]) {
    this.rows = cells.length;
    this.columns = cells.reduce((most, row) => Math.max(most, row.length), 0);
  }

  look(row: number, column: number): number {
    const cell = this.cells[row]?.[column];
    if (typeof cell === 'number') {
      this.seen = cell;
      return Number.isFinite(cell) ? cellLook.number : cellLook.text;
    }
    const text = cell?.trim() ?? '';
    if (text === '') return cellLook.empty;
    if (plainNumber.test(text)) {
      this.seen = Number(text);
      return cellLook.number;
    }
    if (text.startsWith('<') && plainNumber.test(text.slice(1)) && text[1] !== '-') {
      this.seen = Number(text.slice(1));
      return cellLook.below;
    }
    return cellLook.text;
  }

  text(row: number, column: number): string {
    const cell = this.cells[row]?.[column];
    return cell === null || cell === undefined ? '' : typeof cell === 'number' ? String(cell) : cell.trim();
  }

  width(row: number): number {
    return this.cells[row]?.length ?? 0;
  }
}

/** The same sheet with rows and columns exchanged: for tables printed with the samples side by side. */
export class TurnedGrid implements Grid {
  constructor(private readonly of: Grid) {}

  get rows(): number {
    return this.of.columns;
  }

  get columns(): number {
    return this.of.rows;
  }

  get seen(): number {
    return this.of.seen;
  }

  look(row: number, column: number): number {
    return this.of.look(column, row);
  }

  text(row: number, column: number): string {
    return this.of.text(column, row);
  }

  width(): number {
    return this.of.rows;
  }
}

/** Spreadsheet letters of a column: 0 → A, 26 → AA. */
export function columnLetters(column: number): string {
  let letters = '';
  for (let rest = column; rest >= 0; rest = Math.floor(rest / 26) - 1) letters = String.fromCharCode(65 + (rest % 26)) + letters;
  return letters;
}

/** Address of a cell as a spreadsheet names it: row 0, column 2 → C1. */
export function cellAddress(row: number, column: number): string {
  return `${columnLetters(column)}${row + 1}`;
}
