const htmlEscapes: Readonly<Record<string, string>> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' };

/** Text made safe to stand in HTML, inside an element or a quoted attribute. */
export function escapeHtml(text: string): string {
  return text.replace(/[&<>"']/g, (character) => htmlEscapes[character]);
}

/** Text made safe to stand in one cell of a Markdown table: no markup, no line break, no column bar. */
export function escapeMarkdown(text: string): string {
  return escapeHtml(text).replace(/[\\`*_{}[\]()#+!|~]/g, '\\$&').replace(/\s*\r?\n\s*/g, ' ');
}

/** Text made safe to stand in a spreadsheet cell: what would be read as a formula (`=`, `+`, `-`, `@`, a tab or a return in front) gets an apostrophe; so does a text that already has one there, so that taking one off gives every text back. */
export function escapeSpreadsheet(text: string): string {
  return /^'*\s*[=+\-@\t\r]/.test(text) ? `'${text}` : text;
}
