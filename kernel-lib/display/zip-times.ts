/**
 * @internal Sets the time of every entry of a ZIP archive (which an .xlsx file is) to 1 January 1980, the first that the format knows, so that
 * the same content gives the same bytes whenever it is written. Changes the bytes in place and returns them.
 *
 * Follows the archive's own directory, at the offsets of the format: end record `PK\5\6`, directory entries `PK\1\2`, local heads `PK\3\4`.
 */
export function withoutZipTimes<Bytes extends Uint8Array>(archive: Bytes): Bytes {
  const view = new DataView(archive.buffer, archive.byteOffset, archive.byteLength);
  let end = archive.byteLength - 22;
  while (end >= 0 && view.getUint32(end, true) !== 0x06054b50) end--;
  if (end < 0) throw new RangeError('withoutZipTimes: these bytes are not a ZIP archive.');
  const entries = view.getUint16(end + 10, true);
  let at = view.getUint32(end + 16, true);
  // Time 0:00, then day 1, month 1 of year 1980 + 0.
  const midnight = 0x00210000;
  for (let entry = 0; entry < entries; entry++) {
    if (view.getUint32(at, true) !== 0x02014b50) throw new RangeError('withoutZipTimes: the archive is damaged: its directory is not where it says.');
    view.setUint32(at + 12, midnight, true);
    view.setUint32(view.getUint32(at + 42, true) + 10, midnight, true);
    at += 46 + view.getUint16(at + 28, true) + view.getUint16(at + 30, true) + view.getUint16(at + 32, true);
  }
  return archive;
}
