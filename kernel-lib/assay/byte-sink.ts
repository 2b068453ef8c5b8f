import { randomBytes } from 'node:crypto';
import { closeSync, fsyncSync, mkdirSync, openSync, renameSync, rmSync, writeSync } from 'node:fs';
import { basename, dirname, join } from 'node:path';
import { writtenPath } from '../display';
import { significantDigits } from './format-number';

const capacity = 1 << 18;
/** Room that one number or separator may need. */
const slack = 64;

/** Text written as bytes into one buffer and from there into a file, which gets its name only when all of it is there. */
export class ByteSink {
  private readonly bytes = Buffer.allocUnsafe(capacity + slack);
  private at = 0;
  private readonly path: string;
  private readonly temporary: string;
  private readonly file: number;

  constructor(asked: string) {
    this.path = writtenPath(asked);
    mkdirSync(dirname(this.path), { recursive: true });
    this.temporary = join(dirname(this.path), `.${basename(this.path)}.${randomBytes(4).toString('hex')}.part`);
    this.file = openSync(this.temporary, 'w');
  }

  /** One ASCII character. */
  byte(code: number): void {
    if (this.at >= capacity) this.flush();
    this.bytes[this.at++] = code;
  }

  /** A number of six significant digits, in the manner of C's `%.6g`. */
  number(value: number): void {
    if (this.at >= capacity) this.flush();
    this.at = significantDigits(value, this.bytes, this.at);
  }

  text(text: string): void {
    // A UTF-16 unit takes at most three bytes.
    if (text.length * 3 > capacity - this.at) this.flush();
    if (text.length * 3 > capacity) {
      this.write(Buffer.from(text, 'utf8'));
      return;
    }
    this.at += this.bytes.write(text, this.at, 'utf8');
  }

  private flush(): void {
    this.write(this.bytes.subarray(0, this.at));
    this.at = 0;
  }

  private write(bytes: Uint8Array): void {
    for (let from = 0; from < bytes.length;) from += writeSync(this.file, bytes, from);
  }

  /** Gives the file its name. */
  finish(): void {
    this.flush();
    fsyncSync(this.file);
    closeSync(this.file);
    renameSync(this.temporary, this.path);
  }

  /** Leaves nothing behind. */
  abandon(): void {
    try {
      closeSync(this.file);
    } catch {
      // It was closed already: only its name is left to remove.
    }
    rmSync(this.temporary, { force: true });
  }
}
