import { cellLook, type Grid } from './grid';

const quote = 0x22;
const newline = 0x0a;
const carriage = 0x0d;
const space = 0x20;

/** What was odd in a delimited file. Rows are counted from 0. */
export interface QuoteFault {
  readonly row: number;
  readonly kind: 'not closed' | 'text after the closing quote' | 'line breaks inside';
}

/** Exact powers of ten: an integer below 2^53 over one of these is the correctly rounded decimal. */
const powersOfTen = Float64Array.from({ length: 23 }, (_, k) => Number(`1e${k}`));

/**
 * A delimited text file as a grid. The file stays bytes; a cell is a position in them, so a sheet of millions of cells costs four bytes a
 * cell besides the file itself. Quoting follows RFC 4180. A general CSV parser makes a text of every cell, which is most of the time of a
 * large import; the tests hold this one to the answers of such a parser.
 */
export class DelimitedGrid implements Grid {
  readonly rows: number;
  readonly columns: number;
  readonly faults: readonly QuoteFault[];
  seen = NaN;
  /** The byte of the decimal mark: '.' or ','. */
  private decimal = 0x2e;
  private readonly starts: Uint32Array;
  private readonly rowFirst: Uint32Array;
  private readonly rowEnd: Uint32Array;

  constructor(
    private readonly bytes: Buffer,
    delimiter: string,
    limits: { readonly columns: number },
  ) {
    const cut = tokenize(bytes, delimiter.charCodeAt(0), limits.columns);
    this.starts = cut.starts;
    this.rowFirst = cut.rowFirst;
    this.rowEnd = cut.rowEnd;
    this.faults = cut.faults;
    this.rows = cut.rowEnd.length;
    let widest = 0;
    for (let row = 0; row < this.rows; row++) widest = Math.max(widest, this.width(row));
    this.columns = widest;
  }

  useDecimal(mark: '.' | ','): void {
    this.decimal = mark.charCodeAt(0);
  }

  width(row: number): number {
    return row < 0 || row >= this.rows ? 0 : this.rowFirst[row + 1] - this.rowFirst[row];
  }

  look(row: number, column: number): number {
    if (row >= this.rows) return cellLook.empty;
    const { bytes } = this;
    const cell = this.rowFirst[row] + column;
    const next = this.rowFirst[row + 1];
    if (cell >= next) return cellLook.empty;
    let at = this.starts[cell];
    let end = cell + 1 === next ? this.rowEnd[row] : this.starts[cell + 1] - 1;
    while (at < end && bytes[at] === space) at++;
    while (end > at && bytes[end - 1] === space) end--;
    if (end - at >= 2 && bytes[at] === quote && bytes[end - 1] === quote) {
      at++;
      end--;
      while (at < end && bytes[at] === space) at++;
      while (end > at && bytes[end - 1] === space) end--;
    }
    if (at === end) return cellLook.empty;
    if (bytes[at] === 0x3c) {
      at++;
      while (at < end && bytes[at] === space) at++;
      return bytes[at] !== 0x2d && this.plain(at, end) ? cellLook.below : cellLook.text;
    }
    return this.plain(at, end) ? cellLook.number : cellLook.text;
  }

  /** Reads a plain decimal number from the bytes into `seen`; false when they hold anything else. */
  private plain(from: number, end: number): boolean {
    const { bytes, decimal } = this;
    let at = from;
    let negative = false;
    if (bytes[at] === 0x2d || bytes[at] === 0x2b) negative = bytes[at++] === 0x2d;
    let digits = 0;
    let whole = 0;
    let places = 0;
    let point = false;
    for (; at < end; at++) {
      const byte = bytes[at];
      if (byte >= 0x30 && byte <= 0x39) {
        whole = whole * 10 + (byte - 0x30);
        digits++;
        if (point) places++;
      } else if (byte === decimal && !point) point = true;
      else break;
    }
    if (digits === 0) return false;
    if (at === end && digits <= 15) {
      const value = whole / powersOfTen[places];
      this.seen = negative ? -value : value;
      return true;
    }
    // Rare: an exponent, or more digits than a double holds exactly.
    if (at < end) {
      if (bytes[at] !== 0x65 && bytes[at] !== 0x45) return false;
      let exponent = at + 1;
      if (bytes[exponent] === 0x2d || bytes[exponent] === 0x2b) exponent++;
      if (exponent >= end) return false;
      for (; exponent < end; exponent++) if (bytes[exponent] < 0x30 || bytes[exponent] > 0x39) return false;
    }
    this.seen = Number(bytes.toString('latin1', from, end).replace(',', '.'));
    return Number.isFinite(this.seen);
  }

  text(row: number, column: number): string {
    if (row < 0 || row >= this.rows) return '';
    const cell = this.rowFirst[row] + column;
    const next = this.rowFirst[row + 1];
    if (cell >= next) return '';
    const start = this.starts[cell];
    const end = cell + 1 === next ? this.rowEnd[row] : this.starts[cell + 1] - 1;
    if (start >= end) return '';
    if (this.bytes[start] === quote) {
      const raw = this.bytes.toString('utf8', start + 1, end);
      const close = raw.trimEnd().endsWith('"') ? raw.lastIndexOf('"') : raw.length;
      return raw.slice(0, close).replaceAll('""', '"').trim();
    }
    return this.bytes.toString('utf8', start, end).trim();
  }
}

interface Tokens {
  readonly starts: Uint32Array;
  readonly rowFirst: Uint32Array;
  readonly rowEnd: Uint32Array;
  readonly faults: QuoteFault[];
}

/** A growing list of numbers. */
class Numbers {
  private data: Uint32Array;
  length = 0;

  constructor(capacity: number) {
    this.data = new Uint32Array(Math.max(16, capacity));
  }

  push(value: number): void {
    if (this.length === this.data.length) {
      const larger = new Uint32Array(this.data.length * 2);
      larger.set(this.data);
      this.data = larger;
    }
    this.data[this.length++] = value;
  }

  done(): Uint32Array {
    return this.data.subarray(0, this.length);
  }
}

/** Cuts the bytes into cells and rows. A quote that is never closed is taken as an ordinary character, and told. */
function tokenize(bytes: Buffer, delimiter: number, mostColumns: number): Tokens {
  const end = bytes.length;
  const starts = new Numbers(Math.ceil(end / 5));
  const rowFirst = new Numbers(1024);
  const rowEnd = new Numbers(1024);
  const faults: QuoteFault[] = [];
  let literalQuotesFrom = Infinity;
  let at = 0;
  while (at < end) {
    rowFirst.push(starts.length);
    const first = starts.length;
    for (;;) {
      starts.push(at);
      if (starts.length - first > mostColumns) throw new RangeError(`row ${rowEnd.length + 1} has more than ${mostColumns} cells`);
      if (bytes[at] === quote && at < literalQuotesFrom) {
        const close = closingQuote(bytes, at, delimiter);
        if (close.at < 0) {
          faults.push({ row: rowEnd.length, kind: 'not closed' });
          literalQuotesFrom = at;
        } else {
          if (close.odd) faults.push({ row: rowEnd.length, kind: 'text after the closing quote' });
          if (close.breaks) faults.push({ row: rowEnd.length, kind: 'line breaks inside' });
          at = close.at + 1;
        }
      }
      while (at < end && bytes[at] !== delimiter && bytes[at] !== newline && bytes[at] !== carriage) at++;
      if (at < end && bytes[at] === delimiter) {
        at++;
        continue;
      }
      break;
    }
    rowEnd.push(at);
    if (at < end) at += bytes[at] === carriage && bytes[at + 1] === newline ? 2 : 1;
  }
  rowFirst.push(starts.length);
  return { starts: starts.done(), rowFirst: rowFirst.done(), rowEnd: rowEnd.done(), faults };
}

/** Where the quoted cell that opens at `from` closes; -1 when it does not. Only blanks may stand between the quote and the next cell. */
function closingQuote(bytes: Buffer, from: number, delimiter: number): { at: number; odd: boolean; breaks: boolean } {
  let odd = false;
  let breaks = false;
  for (let at = from + 1; at < bytes.length; at++) {
    const byte = bytes[at];
    if (byte === newline || byte === carriage) breaks = true;
    if (byte !== quote) continue;
    if (bytes[at + 1] === quote) {
      at++;
      continue;
    }
    let after = at + 1;
    while (after < bytes.length && bytes[after] === space && delimiter !== space) after++;
    if (after >= bytes.length || bytes[after] === delimiter || bytes[after] === newline || bytes[after] === carriage) return { at, odd, breaks };
    odd = true;
  }
  return { at: -1, odd, breaks };
}

const candidates = [',', ';', '\t', '|'] as const;

/**
 * The delimiter under which the first rows agree best on how many cells they have. A file of one column has none, and gets a comma.
 *
 * @param bytes UTF-8
 */
export function guessDelimiter(bytes: Buffer): string {
  const head = bytes.subarray(0, 65_536);
  let best: { delimiter: string; score: number } = { delimiter: ',', score: 0 };
  for (const delimiter of candidates) {
    let widths: number[];
    try {
      const grid = new DelimitedGrid(head, delimiter, { columns: 1_000_000 });
      widths = Array.from({ length: Math.min(grid.rows, 200) }, (_, row) => grid.width(row));
    } catch {
      continue;
    }
    if (head.length < bytes.length && widths.length > 1) widths.pop();
    const counts = new Map<number, number>();
    for (const width of widths) if (width > 1) counts.set(width, (counts.get(width) ?? 0) + 1);
    // Rows that agree count fully, wider rows a little more: a decimal comma also cuts rows, but into fewer agreeing pieces.
    for (const [width, rows] of counts) {
      const score = (rows / widths.length) * (1 + Math.log2(width) / 4);
      if (score > best.score) best = { delimiter, score };
    }
  }
  return best.delimiter;
}
