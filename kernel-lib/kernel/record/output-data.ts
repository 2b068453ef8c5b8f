import { createHash } from 'node:crypto';
import { stripVTControlCharacters } from 'node:util';
import { outputText, type NotebookOutput } from '../notebook/document';

/** What kind of thing an output is, for a record: pictures and colours are left out, the data behind them are not. */
export type OutputKind = 'figure' | 'table' | 'text' | 'error';

/** The data of one output, apart from how it looks. */
export interface OutputData {
  readonly kind: OutputKind;
  /** What is hashed and compared. */
  readonly content: string;
}

const vegaLite = /^application\/vnd\.vegalite\.v\d+\+json$/;

export const sha256 = (text: string | Uint8Array): string => createHash('sha256').update(text).digest('hex');

/** JSON with its keys in order, so that the same data are the same text. */
export function canonicalJson(value: unknown): string {
  return JSON.stringify(value, (_, part: unknown) =>
    typeof part === 'object' && part !== null && !Array.isArray(part) ? Object.fromEntries(Object.entries(part).sort(([a], [b]) => (a < b ? -1 : 1))) : part,
  );
}

/** The data of an output of a notebook file; undefined for one that carries none (warnings, empty text). */
export function outputData(output: NotebookOutput): OutputData | undefined {
  if (output.output_type === 'stream') {
    const text = outputText(output.text) ?? '';
    return output.name === 'stderr' || text === '' ? undefined : { kind: 'text', content: stripVTControlCharacters(text) };
  }
  if (output.output_type === 'error') return { kind: 'error', content: `${String(output.ename)}: ${String(output.evalue)}` };
  const data = (output.data ?? {}) as Record<string, unknown>;
  const spec = Object.keys(data).find((type) => vegaLite.test(type));
  if (spec !== undefined) return { kind: 'figure', content: canonicalJson(data[spec]) };
  const html = outputText(data['text/html']);
  if (html?.includes('<table') === true) return { kind: 'table', content: html };
  const text = outputText(data['text/plain']) ?? html;
  return text === undefined || text === '' ? undefined : { kind: 'text', content: text };
}

/** A number in an output, where it stands and as it is printed. */
export interface PlacedNumber {
  readonly place: string;
  readonly text: string;
}

const htmlEntities: Readonly<Record<string, string>> = { '&amp;': '&', '&lt;': '<', '&gt;': '>', '&quot;': '"', '&#39;': "'" };
const plain = (html: string): string => html.replace(/<[^>]*>/g, '').replace(/&(?:amp|lt|gt|quot|#39);/g, (entity) => htmlEntities[entity]);

/** The parts of an output that can differ, each with a name that a reader can find: cells of a table, values of a figure's data, lines of text. */
export function outputParts(data: OutputData): readonly PlacedNumber[] {
  if (data.kind === 'table') return tableParts(data.content);
  if (data.kind === 'figure') return figureParts(data.content);
  return data.content.split('\n').map((text, i) => ({ place: `line ${i + 1}`, text }));
}

function tableParts(html: string): PlacedNumber[] {
  const parts: PlacedNumber[] = [];
  for (const [t, table] of (html.match(/<table[\s\S]*?<\/table>/g) ?? []).entries()) {
    const heads = (table.match(/<th[\s\S]*?<\/th>/g) ?? []).map(plain);
    const rows = (table.match(/<tr[\s\S]*?<\/tr>/g) ?? []).map((row) => (row.match(/<td[\s\S]*?<\/td>/g) ?? []).map(plain)).filter((cells) => cells.length > 0);
    const where = t === 0 ? '' : `table ${t + 1}, `;
    heads.forEach((text, j) => parts.push({ place: `${where}head of column ${j + 1}`, text }));
    rows.forEach((cells, i) => cells.forEach((text, j) => parts.push({ place: `${where}row ${i + 1} (${cells[0]}), column ${heads[j] ?? j + 1}`, text })));
  }
  parts.push({ place: 'the text around the table', text: plain(html.replace(/<table[\s\S]*?<\/table>/g, ' ').replace(/<caption>/g, '')).trim() });
  return parts;
}

/** Values of a figure's data, by their path; a data row that has a sample's name (its first tooltip) is called by it. */
function figureParts(json: string): PlacedNumber[] {
  const parts: PlacedNumber[] = [];
  const walk = (value: unknown, place: string): void => {
    if (Array.isArray(value)) value.forEach((part, i) => walk(part, `${place}[${i + 1}]`));
    else if (typeof value === 'object' && value !== null) {
      const { sample, t0 = sample } = value as { sample?: unknown; t0?: unknown };
      const named = typeof t0 === 'string' ? `${place} (${t0})` : place;
      for (const [name, part] of Object.entries(value)) walk(part, `${named} ${name}`.trim());
    } else parts.push({ place, text: String(value) });
  };
  walk(JSON.parse(json), '');
  return parts;
}
