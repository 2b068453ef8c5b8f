import { createHmac, randomUUID, timingSafeEqual } from 'node:crypto';

/** The messages of Jupyter's messaging protocol 5.3 on the wire: frames, signed. */
export const protocolVersion = '5.3';

export interface MessageHeader {
  readonly msg_id: string;
  readonly msg_type: string;
  readonly session: string;
  readonly username: string;
  readonly date: string;
  readonly version: string;
}

export interface Message {
  /** Who asked, as the router socket names them; for a published message its topic. */
  readonly identities: readonly Buffer[];
  readonly header: MessageHeader;
  readonly parent: MessageHeader | Record<string, never>;
  readonly metadata: Readonly<Record<string, unknown>>;
  readonly content: Readonly<Record<string, unknown>>;
}

const delimiter = Buffer.from('<IDS|MSG>');

/** A message that cannot be trusted or read. */
export class WireError extends Error {
  override readonly name = 'WireError';
}

/** Reads and writes the messages of one kernel. */
export class Wire {
  private readonly session = randomUUID();

  /** @param key the connection file's key; an empty one turns signing off, as the protocol says */
  constructor(private readonly key: string) {}

  private sign(parts: readonly (Buffer | string)[]): string {
    if (this.key === '') return '';
    const hmac = createHmac('sha256', this.key);
    for (const part of parts) hmac.update(part);
    return hmac.digest('hex');
  }

  /** @throws WireError for frames without a delimiter, with a wrong signature, or that are not JSON */
  read(frames: readonly Buffer[]): Message {
    const at = frames.findIndex((frame) => frame.equals(delimiter));
    if (at < 0 || frames.length < at + 6) throw new WireError('A message came without its delimiter or parts.');
    const parts = frames.slice(at + 2, at + 6);
    const given = frames[at + 1];
    const wanted = Buffer.from(this.sign(parts));
    if (given.length !== wanted.length || !timingSafeEqual(given, wanted)) throw new WireError('A message came with a wrong signature.');
    try {
      const [header, parent, metadata, content] = parts.map((part) => JSON.parse(part.toString()) as never);
      return { identities: frames.slice(0, at), header, parent, metadata, content };
    } catch (error) {
      throw new WireError(`A message is not JSON: ${(error as Error).message}`);
    }
  }

  /** The frames of a message that answers `parent`. */
  write(type: string, content: object, parent: Message | undefined, identities: readonly Buffer[], metadata: object = {}): Buffer[] {
    const header: MessageHeader = {
      msg_id: randomUUID(),
      msg_type: type,
      session: this.session,
      username: 'kernel',
      date: new Date().toISOString(),
      version: protocolVersion,
    };
    const parts = [header, parent?.header ?? {}, metadata, content].map((part) => Buffer.from(JSON.stringify(part)));
    return [...identities, delimiter, Buffer.from(this.sign(parts)), ...parts];
  }
}
