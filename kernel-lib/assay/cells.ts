import { cellState } from '../suite';
import { cellKey, plainSigns, vocabulary, type Vocabulary } from './spellings';

/** How the sheet writes what is not a plain number. */
export interface CellConventions {
  readonly decimal: '.' | ',';
  /** What a negative concentration means: below detection at its size (a laboratory convention), or an error. */
  readonly negative: 'below-detection' | 'error';
  /** What `n.d.` means: not determined (missing) or not detected (below detection). */
  readonly notDetermined: 'missing' | 'below-detection';
  /** What the number after ± or in brackets is: that many standard deviations. */
  readonly statedSigmas: 1 | 2;
}

/**
 * What numbers a quantity can have: a concentration has none below zero; loss on ignition, epsilon values and coordinates do; columns that
 * the library wrote itself hold any number, no-data codes not looked for.
 */
export type Signs = 'positive' | 'signed' | 'any';

/** What a cell's text turned out to be. One decoder is used for all cells; its fields hold the last one. */
export class CellDecoder {
  state: number = cellState.missing;
  value = NaN;
  limit = NaN;
  sigma = NaN;
  /** Why the cell could not be read; '' when it could. */
  fault = '';
  /** Something read but worth a look: `approximate`, `footnote mark`, `n.d.`, `no-data code`, `stated uncertainty`, `grouped digits`. */
  remark = '';

  private grouped = false;
  private readonly words: Vocabulary = vocabulary();

  constructor(private readonly conventions: CellConventions) {}

  private set(state: number, value = NaN, limit = NaN): void {
    this.state = state;
    this.value = value;
    this.limit = limit;
    this.sigma = NaN;
    this.fault = '';
    this.remark = '';
  }

  private unreadable(fault: string): void {
    this.refuse(fault);
  }

  /** Makes the last cell unreadable, for a reason that its text alone does not show. */
  refuse(fault: string): void {
    this.set(cellState.missing);
    this.fault = fault;
  }

  /**
   * Decodes the text of a number cell.
   *
   * @param raw as in the sheet
   * @param signs what numbers the quantity can have
   */
  decode(raw: string, signs: Signs): void {
    if (raw.length > 200) return this.unreadable('a long text');
    const text = plainSigns(raw);
    const kind = this.words.cells.get(cellKey(text));
    if (text === '' || kind === 'missing') return this.set(cellState.missing);
    if (kind === 'below') return this.set(cellState.belowDetection);
    if (kind === 'above') return this.set(cellState.aboveRange);
    if (kind === 'ambiguous') {
      this.set(this.conventions.notDetermined === 'missing' ? cellState.missing : cellState.belowDetection);
      this.remark = 'n.d.';
      return;
    }
    const bound = /^(<=?|>=?|≤|≥|‹|›)\s*(.+)$/.exec(text) ?? /^(.+?)\s*(\+)$/.exec(text)?.map((part, i, all) => (i === 0 ? part : all[3 - i]));
    if (bound !== null && bound !== undefined) {
      const limit = this.number(bound[2]);
      if (Number.isNaN(limit)) return this.unreadable('not a number');
      if (limit < 0 && signs === 'positive') return this.unreadable('a negative limit');
      return /[<≤‹]/.test(bound[1]) ? this.set(cellState.belowDetection, NaN, limit) : this.set(cellState.aboveRange, NaN, limit);
    }
    const plain = this.number(text);
    if (!Number.isNaN(plain)) {
      this.take(plain, signs);
      if (this.fault === '' && this.grouped) this.remark = 'grouped digits';
      return;
    }
    if (/^#[A-Z/0]+[!?]?$/.test(text)) return this.unreadable('a spreadsheet error');
    if (this.withUncertainty(text, signs)) return;
    const marked = /^(?:~|≈|∼|ca\.?|c\.|approx\.?)\s*(.+)$/i.exec(text);
    if (marked !== null) return this.remarked(marked[1], signs, 'approximate');
    const footnote = /^(.+?)\s*(?:\*+|†|‡|§|¶|#|\?|!)$/.exec(text);
    if (footnote !== null) return this.remarked(footnote[1], signs, 'footnote mark');
    this.unreadable('not a number');
  }

  /** Takes a plain number: measured, or what the sheet's conventions make of a negative one. */
  take(value: number, signs: Signs): void {
    if (value < 0 && signs !== 'any' && this.words.sentinels.has(value) && !(signs === 'signed' && value > -100)) {
      this.set(cellState.missing);
      this.remark = 'no-data code';
    } else if (value < 0 && signs === 'positive') {
      if (this.conventions.negative === 'below-detection') this.set(cellState.belowDetection, NaN, -value);
      else this.unreadable('a negative concentration');
    } else this.set(cellState.measured, value);
  }

  private remarked(text: string, signs: Signs, remark: string): void {
    const value = this.number(text);
    if (Number.isNaN(value)) return this.unreadable('not a number');
    this.take(value, signs);
    if (this.fault === '') this.remark = remark;
  }

  private withUncertainty(text: string, signs: Signs): boolean {
    const stated = /^(.+?)\s*(?:±|\+\/-|\+-)\s*(.+)$/.exec(text);
    const bracketed = stated === null ? /^([-+]?[\d.,]+)\s*\(\s*([\d.,]+)\s*\)$/.exec(text) : null;
    const parts = stated ?? bracketed;
    if (parts === null) return false;
    const value = this.number(parts[1]);
    let sigma = this.number(parts[2]);
    if (Number.isNaN(value) || Number.isNaN(sigma) || sigma < 0) return false;
    // 0.512638(12): digits in brackets without a decimal mark stand under the last digits of the value.
    if (bracketed !== null && /^\d+$/.test(parts[2])) {
      const mark = parts[1].lastIndexOf(this.conventions.decimal);
      if (mark >= 0) sigma = Number(`${sigma}e-${parts[1].length - mark - 1}`);
    }
    this.take(value, signs);
    if (this.state === cellState.measured) this.sigma = sigma / this.conventions.statedSigmas;
    this.remark = 'stated uncertainty';
    return true;
  }

  /** A number as people write it: decimal mark of the sheet, digits grouped by the other mark, a blank or an apostrophe; else NaN. */
  number(text: string): number {
    const { decimal } = this.conventions;
    const written = text.trim();
    let digits = written;
    if (/^[-+]?\d{1,3}([ ']\d{3})+([.,]\d+)?$/.test(digits)) digits = digits.replace(/[ ']/g, '');
    const group = decimal === '.' ? ',' : '.';
    if (new RegExp(`^[-+]?\\d{1,3}(\\${group}\\d{3})+(\\${decimal}\\d*)?$`).test(digits)) digits = digits.replaceAll(group, '');
    this.grouped = digits !== written;
    if (decimal === ',') {
      if (/^[-+]?\d*\.\d+$/.test(digits)) return NaN;
      digits = digits.replace(',', '.');
    }
    return /^[-+]?(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?$/.test(digits) ? Number(digits) : NaN;
  }
}
