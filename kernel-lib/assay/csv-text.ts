/** A text as one cell of a comma-separated file: quoted where it must be (RFC 4180). */
export function csvText(text: string): string {
  return /[",\r\n]|^\s|\s$/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}
