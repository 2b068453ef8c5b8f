import { z } from 'zod';
import { knownAnalytes } from '../chemistry';
import { field, once, readCsvTable, readJsonTable } from '../tables';

const words = z.array(z.string());

const schema = z.strictObject({
  about: z.string(),
  standing: field.standing,
  analytes: z.record(z.string(), words),
  elementNames: z.record(z.string(), z.string()),
  units: z.array(z.strictObject({ unit: z.string(), factor: z.number(), spellings: words })),
  methods: words,
  methodPreference: z.strictObject({
    about: z.string(),
    oxides: words,
    resistant: z.strictObject({ elements: words, order: words }),
    elements: words,
  }),
  labels: z.record(z.string(), words),
  quantities: z.record(z.string(), z.strictObject({ unit: z.string(), limit: z.number(), negative: z.string(), spellings: words })),
  uncertainty: z.array(z.strictObject({ sigmas: z.number(), spellings: words })),
  headerRows: z.strictObject({ unit: words, method: words, limit: words, upperLimit: words, analyte: words }),
  cells: z.strictObject({ missing: words, below: words, above: words, ambiguous: words, sentinels: z.array(z.number()) }),
});

/** A header or cell text as it is compared: plain digits, one form of each sign, no case, blanks, underscores or full stops. */
export function spellingKey(text: string): string {
  return plainSigns(text)
    .toLowerCase()
    .replace(/[\s_.]+/g, '');
}

/** Text with subscripts and superscripts as plain digits, one minus, one micro sign, single blanks, no invisible characters. */
export function plainSigns(text: string): string {
  return text
    .normalize('NFKC')
    .replace(/[\u200b-\u200f\u2060\ufeff\u00ad]/g, '')
    .replace(/[\u2212\u2010\u2011\ufe63\uff0d]/g, '-')
    .replace(/\u00b5/g, '\u03bc')
    .replace(/[\u2044\u2215]/g, '/')
    .replace(/\s+/g, ' ')
    .trim();
}

/** A unit as a sheet writes it: canonical unit, and the factor from the sheet's number into that unit. */
export interface SpelledUnit {
  readonly unit: string;
  readonly factor: number;
}

/** Methods in order of preference, for oxides, for elements held in resistant minerals, and for other elements. */
export interface MethodPreference {
  readonly oxides: readonly string[];
  readonly resistant: { readonly elements: readonly string[]; readonly order: readonly string[] };
  readonly elements: readonly string[];
}

/** The vocabulary of headers and cells, by spelling key. */
export interface Vocabulary {
  readonly analytes: ReadonlyMap<string, string>;
  /** Symbols of one or two letters that are also ordinary words or letters: known only in their exact case. */
  readonly exactOnly: ReadonlySet<string>;
  readonly units: ReadonlyMap<string, SpelledUnit>;
  readonly methods: ReadonlySet<string>;
  readonly labels: ReadonlyMap<string, { readonly label: string; readonly rank: number }>;
  readonly quantities: ReadonlyMap<string, { readonly symbol: string; readonly unit: string; readonly limit: number; readonly negated: boolean }>;
  readonly uncertainty: ReadonlyMap<string, number>;
  readonly headerRows: ReadonlyMap<string, 'unit' | 'method' | 'limit' | 'upperLimit' | 'analyte'>;
  readonly cells: ReadonlyMap<string, 'missing' | 'below' | 'above' | 'ambiguous'>;
  readonly sentinels: ReadonlySet<number>;
  readonly methodPreference: MethodPreference;
}

/** Single letters and words that stand for an element only when written exactly so. */
const alsoWords = ['As', 'At', 'B', 'C', 'F', 'H', 'I', 'In', 'K', 'N', 'No', 'O', 'P', 'S', 'U', 'V', 'W', 'Y', 'Be', 'He', 'Co', 'Pt', 'Sample'];

/** @internal The vocabulary of reference-tables/analyte-spellings.json, checked and indexed once. */
export const vocabulary = once((): Vocabulary => {
  const table = readJsonTable('analyte-spellings.json', schema);
  const analytes = new Map<string, string>();
  for (const { symbol } of knownAnalytes) analytes.set(spellingKey(symbol), symbol);
  for (const [symbol, name] of Object.entries(table.elementNames)) analytes.set(spellingKey(name), symbol);
  for (const [symbol, spellings] of Object.entries(table.analytes)) for (const spelling of spellings) analytes.set(spellingKey(spelling), symbol);
  const units = new Map<string, SpelledUnit>();
  for (const { unit, factor, spellings } of table.units) for (const spelling of spellings) units.set(spellingKey(spelling), { unit, factor });
  const labels = new Map<string, { label: string; rank: number }>();
  for (const [label, spellings] of Object.entries(table.labels))
    spellings.forEach((spelling, rank) => labels.set(spellingKey(spelling), { label, rank }));
  const quantities = new Map<string, { symbol: string; unit: string; limit: number; negated: boolean }>();
  for (const [symbol, { unit, limit, negative, spellings }] of Object.entries(table.quantities)) {
    for (const spelling of spellings) {
      quantities.set(spellingKey(spelling), { symbol, unit, limit, negated: new RegExp(`(^|[^a-z])${negative}\\)?$`, 'i').test(spelling) });
    }
  }
  const uncertainty = new Map(
    table.uncertainty.flatMap(({ sigmas, spellings }) => spellings.map((spelling): [string, number] => [spellingKey(spelling), sigmas])),
  );
  const headerRows = new Map<string, 'unit' | 'method' | 'limit' | 'upperLimit' | 'analyte'>();
  for (const [kind, spellings] of Object.entries(table.headerRows))
    for (const spelling of spellings) headerRows.set(spellingKey(spelling), kind as 'unit');
  const cells = new Map<string, 'missing' | 'below' | 'above' | 'ambiguous'>();
  for (const kind of ['missing', 'below', 'above', 'ambiguous'] as const)
    for (const spelling of table.cells[kind]) cells.set(cellKey(spelling), kind);
  return {
    analytes,
    exactOnly: new Set(alsoWords.map(spellingKey)),
    units,
    methods: new Set(table.methods.map(spellingKey)),
    labels,
    quantities,
    uncertainty,
    headerRows,
    cells,
    sentinels: new Set(table.cells.sentinels),
    methodPreference: table.methodPreference,
  };
});

/** A cell's word as it is compared: no case, no blanks, full stops kept. */
export function cellKey(text: string): string {
  return plainSigns(text).toLowerCase().replace(/\s+/g, '');
}

/** Range in which an analyte lies in an igneous rock, in its canonical unit. */
export interface PlausibleRange {
  readonly low: number;
  readonly high: number;
}

const rangeRow = z.strictObject({
  analyte: field.text,
  low: field.number,
  high: field.number,
  unit: field.text,
  note: field.optionalText,
  standing: field.standing,
});

/** @internal Plausible ranges by analyte (reference-tables/plausible-ranges.csv): only ever used to rule a unit out. */
export const plausibleRanges = once(
  (): ReadonlyMap<string, PlausibleRange> =>
    new Map(readCsvTable('plausible-ranges.csv', rangeRow).map(({ analyte, low, high }) => [analyte, { low, high }])),
);
