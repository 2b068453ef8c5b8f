import { isUtf8 } from 'node:buffer';

/** A text file's bytes as UTF-8 without byte-order mark, and the encoding they had. */
export interface DecodedText {
  readonly bytes: Buffer;
  readonly encoding: 'UTF-8' | 'UTF-16LE' | 'UTF-16BE' | 'Windows-1252';
}

/**
 * Finds the encoding of a text file: by its byte-order mark; UTF-16 without a mark by its zero bytes; else UTF-8 where the bytes are valid
 * UTF-8, and Windows-1252 (what older spreadsheet programs write) where they are not.
 */
export function decodeText(bytes: Buffer): DecodedText {
  if (bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf) return { bytes: bytes.subarray(3), encoding: 'UTF-8' };
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return utf16(bytes.subarray(2), 'UTF-16LE');
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return utf16(bytes.subarray(2), 'UTF-16BE');
  const head = bytes.subarray(0, 512);
  let evenZeros = 0;
  let oddZeros = 0;
  for (let i = 0; i < head.length; i++) if (head[i] === 0) i % 2 === 0 ? evenZeros++ : oddZeros++;
  if (oddZeros > head.length / 8 && evenZeros === 0) return utf16(bytes, 'UTF-16LE');
  if (evenZeros > head.length / 8 && oddZeros === 0) return utf16(bytes, 'UTF-16BE');
  if (isUtf8(bytes)) return { bytes, encoding: 'UTF-8' };
  return { bytes: Buffer.from(windows1252(bytes), 'utf8'), encoding: 'Windows-1252' };
}

function utf16(bytes: Buffer, encoding: 'UTF-16LE' | 'UTF-16BE'): DecodedText {
  return { bytes: Buffer.from(new TextDecoder(encoding).decode(bytes), 'utf8'), encoding };
}

/** The characters of Windows-1252 from 0x80 to 0x9f, where it differs from Latin-1 (WHATWG Encoding Standard, index windows-1252). */
const betweenControls = '€\u0081‚ƒ„…†‡ˆ‰Š‹Œ\u008dŽ\u008f\u0090‘’“”•–—˜™š›œ\u009džŸ';

/** The runtime's own decoder of this name passes these characters through as controls in some versions, so they are set here. */
function windows1252(bytes: Buffer): string {
  return bytes.toString('latin1').replace(/[\u0080-\u009f]/g, (control) => betweenControls[control.charCodeAt(0) - 0x80]);
}
