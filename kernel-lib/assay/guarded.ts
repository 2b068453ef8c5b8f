/** Takes off the apostrophe that made a text inert for spreadsheet programs (see `escapeSpreadsheet`). */
export function unguarded(text: string): string {
  return /^'+\s*[=+\-@\t\r]/.test(text) ? text.slice(1) : text;
}
