/** Remarks on rows, each text kept once. */
export class RemarkBook {
  private readonly codes: Uint16Array;
  private readonly known: string[] = [''];
  private readonly codeOf = new Map<string, number>([['', 0]]);

  constructor(size: number) {
    this.codes = new Uint16Array(size);
  }

  private code(text: string): number {
    let code = this.codeOf.get(text);
    if (code === undefined) {
      if (this.known.length > 65000) return 0;
      this.codeOf.set(text, (code = this.known.push(text) - 1));
    }
    return code;
  }

  /** Adds a remark to a row, after what is there. */
  note(row: number, text: string): void {
    const there = this.codes[row];
    this.codes[row] = this.code(there === 0 ? text : `${this.known[there]}; ${text}`);
  }

  all(text: string): void {
    this.codes.fill(this.code(text));
  }

  texts(): readonly string[] {
    const { codes, known } = this;
    const texts = new Array<string>(codes.length);
    for (let i = 0; i < codes.length; i++) texts[i] = known[codes[i]];
    return texts;
  }
}
