import { inflateRawSync } from 'node:zlib';
import { AssayError } from './errors';
import { sizeLimits } from './limits';

/** One part of a packed workbook. */
interface ZipPart {
  readonly method: number;
  readonly packed: number;
  readonly unpacked: number;
  readonly offset: number;
}

/**
 * The parts of a packed workbook (.xlsx, .ods), unpacked one at a time. The sizes that the file claims are summed before anything is
 * unpacked, and unpacking stops at the claimed size: a file made to swell up is refused in little memory.
 */
export class ZipParts {
  private readonly parts: ReadonlyMap<string, ZipPart>;

  /** @throws AssayError for something that is not a whole zip file, is encrypted, or is too large unpacked */
  constructor(
    private readonly bytes: Buffer,
    private readonly file: string,
  ) {
    this.parts = readDirectory(bytes, file);
    let unpacked = 0;
    for (const part of this.parts.values()) unpacked += part.unpacked;
    if (unpacked > sizeLimits.unpackedBytes || (unpacked > 20_000_000 && unpacked > sizeLimits.unpackedRatio * bytes.length)) {
      throw new AssayError(
        `${file} would unpack from ${megabytes(bytes.length)} to ${megabytes(unpacked)}, which no assay sheet does. It is not opened; export the sheet as .csv.`,
      );
    }
  }

  get names(): readonly string[] {
    return [...this.parts.keys()];
  }

  has(name: string): boolean {
    return this.parts.has(name);
  }

  /** The unpacked bytes of a part; undefined when the file has no such part. */
  read(name: string): Buffer | undefined {
    const part = this.parts.get(name);
    if (part === undefined) return undefined;
    const { bytes, file } = this;
    const broken = (why: string) => new AssayError(`${file} is damaged (${name}: ${why}). Open it in a spreadsheet program and save it again.`);
    if (part.offset + 30 > bytes.length || bytes.readUInt32LE(part.offset) !== 0x04034b50) throw broken('no such part where the directory says');
    const start = part.offset + 30 + bytes.readUInt16LE(part.offset + 26) + bytes.readUInt16LE(part.offset + 28);
    if (start + part.packed > bytes.length) throw broken('cut short');
    const packed = bytes.subarray(start, start + part.packed);
    if (part.method === 0) return packed;
    if (part.method !== 8) throw broken(`packed by method ${part.method}`);
    try {
      // Claimed sizes are not trusted: unpacking past them stops.
      return inflateRawSync(packed, { maxOutputLength: Math.max(1, part.unpacked) });
    } catch (error) {
      throw broken((error as NodeJS.ErrnoException).code === 'ERR_BUFFER_TOO_LARGE' ? 'larger than it claims to be' : 'cannot be unpacked');
    }
  }
}

const megabytes = (bytes: number) => `${(bytes / 1e6).toFixed(bytes < 1e7 ? 2 : 0)} MB`;

function readDirectory(bytes: Buffer, file: string): Map<string, ZipPart> {
  const damaged = () => new AssayError(`${file} is damaged or not a workbook. Open it in a spreadsheet program and save it again as .xlsx or .csv.`);
  let end = -1;
  for (let at = bytes.length - 22; at >= 0 && at > bytes.length - 65_558; at--) {
    if (bytes.readUInt32LE(at) === 0x06054b50) {
      end = at;
      break;
    }
  }
  if (end < 0) throw damaged();
  const count = bytes.readUInt16LE(end + 10);
  if (count > sizeLimits.parts)
    throw new AssayError(`${file} has ${count} parts, which no assay workbook has. It is not opened; export the sheet as .csv.`);
  let at = bytes.readUInt32LE(end + 16);
  const parts = new Map<string, ZipPart>();
  for (let i = 0; i < count; i++) {
    if (at + 46 > bytes.length || bytes.readUInt32LE(at) !== 0x02014b50) throw damaged();
    if ((bytes.readUInt16LE(at + 8) & 1) !== 0) throw new AssayError(`${file} is protected by a password. Save a copy without one.`);
    const nameLength = bytes.readUInt16LE(at + 28);
    const name = bytes.toString('utf8', at + 46, at + 46 + nameLength);
    parts.set(name.replace(/^\//, ''), {
      method: bytes.readUInt16LE(at + 10),
      packed: bytes.readUInt32LE(at + 20),
      unpacked: bytes.readUInt32LE(at + 24),
      offset: bytes.readUInt32LE(at + 42),
    });
    at += 46 + nameLength + bytes.readUInt16LE(at + 30) + bytes.readUInt16LE(at + 32);
  }
  return parts;
}
