import { StringDecoder } from 'node:string_decoder';

type StreamName = 'stdout' | 'stderr';

/** Longest text that one cell may print, in characters of both streams together. */
export const mostPrinted = 1_000_000;
/** Text is gathered up to this length, so that a cell printing line by line does not send a message a line. */
const gathered = 8_192;
const longestWait = 30;

/**
 * What a cell prints on its way to the front end: gathered into larger pieces, and cut with a clear message past a limit, so that a
 * loop that prints for ever costs neither memory nor the notebook.
 */
export class StreamGate {
  private name: StreamName = 'stdout';
  private pieces: string[] = [];
  private length = 0;
  private sent = 0;
  private dropped = 0;
  private timer: NodeJS.Timeout | undefined;
  private readonly decoders = { stdout: new StringDecoder('utf8'), stderr: new StringDecoder('utf8') };

  constructor(
    private readonly send: (name: StreamName, text: string) => void,
    private readonly limit: number = mostPrinted,
  ) {}

  write(name: StreamName, chunk: string | Uint8Array): void {
    const size = chunk.length;
    if (this.sent + this.length >= this.limit) {
      this.dropped += size;
      return;
    }
    let text = typeof chunk === 'string' ? chunk : this.decoders[name].write(Buffer.from(chunk.buffer, chunk.byteOffset, chunk.byteLength));
    if (name !== this.name) this.flush();
    this.name = name;
    const room = this.limit - this.sent - this.length;
    if (text.length > room) {
      this.dropped += text.length - room;
      text = text.slice(0, room);
    }
    this.pieces.push(text);
    this.length += text.length;
    if (this.length >= gathered) this.flush();
    else if (this.timer === undefined) this.timer = setTimeout(() => this.flush(), longestWait).unref();
  }

  /** Sends what is gathered. Called before any other kind of output, so that the order stays as the cell made it. */
  flush(): void {
    clearTimeout(this.timer);
    this.timer = undefined;
    if (this.length === 0) return;
    this.sent += this.length;
    const text = this.pieces.join('');
    this.pieces = [];
    this.length = 0;
    this.send(this.name, text);
  }

  /** The end of the cell: sends the rest and says how much was cut. */
  end(): void {
    this.flush();
    if (this.dropped > 0) {
      const count = this.dropped.toLocaleString('en');
      this.send('stderr', `\nOutput cut: ${count} more characters were printed by this cell and are not kept. Print less, or write to a file.\n`);
    }
    this.sent = 0;
    this.dropped = 0;
  }
}
