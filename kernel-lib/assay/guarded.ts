import { escapeSpreadsheet } from '../display';
import { spellingKey, vocabulary } from './spellings';

/** Words that make a row a header row wherever it stands (`LOD`, `units`): a sample of that name must not pass for one. */
function isHeaderWord(text: string): boolean {
  return vocabulary().headerRows.has(spellingKey(text.replace(/^'+/, '')));
}

/** A text made inert for spreadsheet programs and for this library's own search for header rows, by an apostrophe in front. */
export function guarded(text: string): string {
  const safe = escapeSpreadsheet(text);
  return safe === text && isHeaderWord(text) ? `'${text}` : safe;
}

/** The text as it was before `guarded`. */
export function unguarded(text: string): string {
  return text.startsWith("'") && (/^'+\s*[=+\-@\t\r]/.test(text) || isHeaderWord(text)) ? text.slice(1) : text;
}
