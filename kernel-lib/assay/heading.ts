import { findAnalyte } from '../chemistry';
import { atomicWeight } from '../tables';
import { plainSigns, spellingKey, vocabulary, type SpelledUnit } from './spellings';

/** What one column head says about its column. */
export type Heading =
  | {
      readonly role: 'analyte';
      readonly symbol: string;
      readonly unit?: SpelledUnit;
      readonly unitText: string;
      readonly method: string;
      readonly note?: string;
    }
  | { readonly role: 'label'; readonly label: string; readonly rank: number }
  | { readonly role: 'quantity'; readonly symbol: string; readonly unit: string; readonly limit: number; readonly negated: boolean }
  | {
      readonly role: 'uncertainty';
      readonly of: string;
      readonly sigmas: number;
      readonly unit?: SpelledUnit;
      readonly unitText: string;
      readonly relative: boolean;
    }
  | { readonly role: 'states'; readonly of: string }
  | { readonly role: 'unknown' };

/** The tags that written sheets carry where a plain head would not be enough; see `writeAssays`. */
export const ownTag = /^(.*?)(?: \(([^()]*)\))? \[(text|number|state|1 sigma)\]$/;

const brackets = /[([{]([^()[\]{}]*)[)\]}]/g;
const separators = /[\s_,;:|]+/;
/** A laboratory's code for a package of analyses: capitals and digits together. Digits alone are part of a name. */
const codeLike = /^(?=.*\d)(?=.*[A-Z]{2})[A-Z0-9]+(?:-[A-Z0-9]+)*$/;

/**
 * Reads a column head: which analyte, unit and method it names, or which label.
 *
 * @param text the head as in the sheet, e.g. `Ba_ppm`, `SiO₂ (wt.%)`, `Zr XRF`, `87Sr/86Sr`
 * @param upperCase the head row is written in capitals throughout, so case says nothing
 */
export function readHeading(text: string, upperCase = false): Heading {
  const key = upperCase ? `^${text}` : `_${text}`;
  let heading = known.get(key);
  if (heading === undefined) {
    heading = parseHeading(text, upperCase);
    if (known.size > mostKnown) known.clear();
    known.set(key, heading);
  }
  return heading;
}

/** Heads repeat within a sheet and between sheets of one laboratory, so readings are kept. */
const known = new Map<string, Heading>();
const mostKnown = 20_000;

function parseHeading(text: string, upperCase: boolean): Heading {
  const plain = plainSigns(text);
  if (plain === '') return { role: 'unknown' };
  const words = vocabulary();
  const label = words.labels.get(spellingKey(plain));
  if (label !== undefined) return { role: 'label', ...label };
  const place = words.quantities.get(spellingKey(plain));
  if (place !== undefined) return { role: 'quantity', ...place };
  return readUncertainty(plain) ?? readAnalyte(plain, upperCase) ?? { role: 'unknown' };
}

/** The symbol that a text without unit and method names, or undefined. `sure`: a unit stands beside it, so a word in the wrong case is meant. */
function symbolOf(text: string, sure: boolean): string | undefined {
  const trimmed = text
    .replace(/^[\s_,;:|-]+|[\s_,;:|]+$/g, '')
    .replace(/^\(\s*\)|\(\s*\)$/g, '')
    .trim();
  if (trimmed === '') return undefined;
  const exact = findAnalyte(trimmed);
  if (exact !== undefined) return exact.symbol;
  const key = spellingKey(trimmed);
  const words = vocabulary();
  const found = words.analytes.get(key) ?? words.analytes.get(key.replace(/\*+$/, ''));
  if (found !== undefined) {
    if (sure) return found;
    // A short symbol in small letters is as often a word or a code (`as`, `pr`, `no`).
    return words.exactOnly.has(key) || (key.length <= 2 && /^\p{Ll}/u.test(trimmed)) ? undefined : found;
  }
  return isotopeRatio(trimmed) ?? elementByMass(trimmed);
}

/** `Sr87/Sr86`, `87Sr/86Sr`, `87Sr86Sr`, `Sr87_86` → `87Sr/86Sr`, for the ratios the library knows. */
function isotopeRatio(text: string): string | undefined {
  const compact = text.replace(/[\s_()]/g, '');
  const massFirst = /^(\d{2,3})([A-Za-z]{1,2})\/?(\d{2,3})([A-Za-z]{1,2})$/.exec(compact);
  const symbolFirst = /^([A-Za-z]{1,2})(\d{2,3})\/?([A-Za-z]{1,2})(\d{2,3})$/.exec(compact);
  const short = /^([A-Za-z]{1,2})(\d{2,3})\/(\d{2,3})$/.exec(compact) ?? undefined;
  const parts =
    massFirst !== null
      ? massFirst.slice(1)
      : symbolFirst !== null
        ? [symbolFirst[2], symbolFirst[1], symbolFirst[4], symbolFirst[3]]
        : short !== undefined
          ? [short[2], short[1], short[3], short[1]]
          : undefined;
  if (parts === undefined) return undefined;
  const proper = (symbol: string) => symbol[0].toUpperCase() + symbol.slice(1).toLowerCase();
  return findAnalyte(`${parts[0]}${proper(parts[1])}/${parts[2]}${proper(parts[3])}`)?.symbol;
}

/** `Ba137`, `137Ba`: an element named by the isotope that was counted; only where the number is a mass of that element. */
function elementByMass(text: string): string | undefined {
  const match = /^([A-Z][a-z]?)[\s-]?(\d{1,3})$/.exec(text) ?? /^(\d{1,3})[\s-]?([A-Z][a-z]?)$/.exec(text);
  if (match === null) return undefined;
  const [symbol, mass] = /\d/.test(match[1]) ? [match[2], Number(match[1])] : [match[1], Number(match[2])];
  if (findAnalyte(symbol)?.kind !== 'element') return undefined;
  return Math.abs(mass - atomicWeight(symbol)) < 1.5 + 0.035 * mass ? symbol : undefined;
}

/** Takes a unit out of a head: in brackets, as last or first word, or glued to the end. */
function takeUnit(text: string): { rest: string; unit?: SpelledUnit; unitText: string } {
  const { units } = vocabulary();
  for (const match of text.matchAll(brackets)) {
    const unit = units.get(spellingKey(match[1]));
    if (unit !== undefined && match[1].trim() !== '')
      return { rest: `${text.slice(0, match.index)} ${text.slice(match.index + match[0].length)}`.trim(), unit, unitText: match[1].trim() };
  }
  const bracketed = /^(.*)[([]([^()[\]]*)[)\]]\s*$/.exec(text);
  if (bracketed !== null) {
    // `SiO2 (XRF, wt%)`: a unit beside something else inside the brackets.
    const pieces = bracketed[2].split(/[,;]/).map((piece) => piece.trim());
    const at = pieces.findIndex((piece) => units.has(spellingKey(piece)) && piece !== '');
    if (at >= 0) {
      const others = pieces.filter((_, i) => i !== at).join(' ');
      return { rest: `${bracketed[1].trim()} ${others}`.trim(), unit: units.get(spellingKey(pieces[at])), unitText: pieces[at] };
    }
  }
  const pieces = text.split(separators).filter((piece) => piece !== '');
  for (let count = Math.min(3, pieces.length - 1); count >= 1; count--) {
    const last = pieces.slice(-count).join(' ').replace(/^in /, '');
    const unit = units.get(spellingKey(last));
    if (unit !== undefined) return { rest: pieces.slice(0, -count).join(' ').replace(/ in$/, ''), unit, unitText: last };
    const first = units.get(spellingKey(pieces.slice(0, count).join(' ')));
    if (first !== undefined) return { rest: pieces.slice(count).join(' '), unit: first, unitText: pieces.slice(0, count).join(' ') };
  }
  // `Sr_ppm_QP31`: a unit between the analyte and a code.
  for (let at = 1; at < pieces.length - 1; at++) {
    const unit = units.get(spellingKey(pieces[at]));
    if (unit !== undefined) return { rest: pieces.filter((_, i) => i !== at).join(' '), unit, unitText: pieces[at] };
  }
  const glued =
    /^(.*?[A-Za-z0-9)*+])[-/]?(wt\.?%|wt\.?-%|mass%|ppm|ppb|ppt|%)$/i.exec(text) ??
    /^([A-Z][A-Za-z0-9()*]*)\/(ppm|ppb|ppt|wt\.?%|mg\/kg|μg\/g)$/.exec(text);
  if (glued !== null) return { rest: glued[1], unit: units.get(spellingKey(glued[2])), unitText: glued[2] };
  return { rest: text, unitText: '' };
}

function readAnalyte(text: string, upperCase: boolean): Heading | undefined {
  const whole = symbolOf(text, upperCase);
  if (whole !== undefined) return { role: 'analyte', symbol: whole, unitText: '', method: '' };
  const { rest, unit, unitText } = takeUnit(text);
  const sure = unit !== undefined || upperCase;
  const symbol = symbolOf(rest, sure);
  if (symbol !== undefined) return { role: 'analyte', symbol, unit, unitText, method: '' };
  const split = splitMethod(rest, sure);
  return split === undefined ? undefined : { role: 'analyte', unit, unitText, ...split };
}

/** `Zr XRF`, `ICP-MS_Ba`, `Ba-QP31`: one part names an analyte, every other part a method or a laboratory's code. */
function splitMethod(text: string, sure: boolean): { symbol: string; method: string } | undefined {
  const { methods } = vocabulary();
  const isMethod = (piece: string) => methods.has(spellingKey(piece)) || codeLike.test(piece);
  for (const cut of [separators, /[\s_,;:|()[\]]+/, /[\s_,;:|()[\]-]+/]) {
    const pieces = text.split(cut).filter((piece) => piece !== '');
    if (pieces.length < 2 || pieces.length > 5) continue;
    for (let at = 0; at < pieces.length; at++) {
      const symbol = symbolOf(pieces[at], sure);
      const others = pieces.filter((_, i) => i !== at);
      if (symbol === undefined || !(methods.has(spellingKey(others.join('-'))) || others.every(isMethod))) continue;
      // Two analytes in one head (`Ba La`) are not an analyte with a code.
      if (others.some((piece) => findAnalyte(piece) !== undefined && !methods.has(spellingKey(piece)))) continue;
      return { symbol, method: others.join(' ') };
    }
  }
  return undefined;
}

/** `±`, `2σ`, `Ba 2SD`, `87Sr/86Sr ±2σ`, `SiO2 error`: the uncertainty of the analyte named, or ('') of the column before. */
function readUncertainty(text: string): Heading | undefined {
  const words = vocabulary();
  const { rest, unit, unitText } = takeUnit(text);
  const relative = /%/.test(unitText) && /rsd|rel/i.test(text);
  const alone = words.uncertainty.get(spellingKey(text)) ?? words.uncertainty.get(spellingKey(rest.replace(/[()[\]]/g, '')));
  if (alone !== undefined) return { role: 'uncertainty', of: '', sigmas: alone, unit, unitText, relative };
  const bare = rest.replace(/[()[\]]/g, ' ').trim();
  const pieces = (bare.includes('±') ? bare.replace(/\s*±\s*/, ' ±') : bare).split(separators).filter((piece) => piece !== '');
  for (let count = Math.min(2, pieces.length - 1); count >= 1; count--) {
    for (const [tail, head] of [
      [pieces.slice(-count).join(' '), pieces.slice(0, -count).join(' ')],
      [pieces.slice(0, count).join(' '), pieces.slice(count).join(' ')],
    ]) {
      const sigmas = words.uncertainty.get(spellingKey(tail));
      const of = sigmas === undefined ? undefined : (symbolOf(head, true) ?? splitMethod(head, true)?.symbol);
      if (sigmas !== undefined && of !== undefined) return { role: 'uncertainty', of, sigmas, unit, unitText, relative };
    }
  }
  return undefined;
}
