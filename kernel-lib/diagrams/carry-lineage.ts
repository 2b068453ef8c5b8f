import { crc32 } from 'node:zlib';
import { escapeHtml } from '../display';

/** Name under which a saved figure carries its lineage. */
const key = 'wedgework-lineage';

/** SVG with the lineage in its metadata element. */
export function svgWith(svg: string, lineage: string): string {
  return svg.replace(/<svg[^>]*>/, (opening) => `${opening}<metadata id="${key}">${escapeHtml(lineage)}</metadata>`);
}

/** HTML page with the lineage in a meta element. */
export function pageWith(page: string, lineage: string): string {
  return page.replace('</head>', `<meta name="${key}" content="${escapeHtml(lineage)}">\n</head>`);
}

const endChunk = 12;

/** PNG with the lineage in an international text chunk (PNG specification, iTXt) before its end. */
export function pngWith(png: Uint8Array, lineage: string): Uint8Array {
  // Keyword, no compression, no language, no translated keyword; then the text in UTF-8.
  const data = Buffer.concat([Buffer.from(`iTXt${key}\0\0\0\0\0`, 'latin1'), Buffer.from(lineage, 'utf8')]);
  const length = Buffer.alloc(4);
  length.writeUInt32BE(data.length - 4);
  const check = Buffer.alloc(4);
  check.writeUInt32BE(crc32(data));
  return Buffer.concat([png.subarray(0, png.length - endChunk), length, data, check, png.subarray(png.length - endChunk)]);
}
