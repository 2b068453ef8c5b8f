import { findAnalyte, knownAnalytes } from '../chemistry';

const subscripts = '₀₁₂₃₄₅₆₇₈₉';
const superscripts = '⁰¹²³⁴⁵⁶⁷⁸⁹';
const lowered = (digits: string) => digits.replace(/\d/g, (digit) => subscripts[Number(digit)]);
const raised = (digits: string) => digits.replace(/\d/g, (digit) => superscripts[Number(digit)]);

/** The mark behind a normalised value; the font has no subscript n, so the small capital stands for it. */
const normalisedMark = 'ɴ';

const spelled: Readonly<Record<string, string>> = {
  FeOT: 'FeO*',
  Fe2O3T: 'Fe₂O₃*',
  'H2O+': 'H₂O⁺',
  'H2O-': 'H₂O⁻',
  'epsilon-Nd': 'εNd',
  'epsilon-Hf': 'εHf',
  'epsilon-Sr': 'εSr',
};

/** A symbol as print sets it: `Al2O3` → Al₂O₃, `FeOT` → FeO*, `87Sr/86Sr` → ⁸⁷Sr/⁸⁶Sr; a text that is no formula stays as it is. */
export function symbolText(symbol: string): string {
  if (Object.hasOwn(spelled, symbol)) return spelled[symbol];
  const analyte = findAnalyte(symbol);
  if (analyte === undefined) return symbol;
  return analyte.kind === 'isotope-ratio' ? symbol.replace(/\d+(?=[A-Z])/g, raised) : symbol.replace(/(?<=[A-Za-z])\d+/g, lowered);
}

const wordSymbols = [...Object.keys(spelled), ...knownAnalytes.map(({ symbol }) => symbol)].sort((a, b) => b.length - a.length);
const escaped = wordSymbols.map((symbol) => symbol.replace(/[+*/-]/g, '\\$&'));
const symbolPattern = new RegExp(`(?<![A-Za-z0-9_])(?:${escaped.join('|')})(?![A-Za-z0-9])`, 'g');

/**
 * An expression as print sets it: real subscripts, × for *, spaces round + and −, ɴ for normalised.
 *
 * @example expressionText('10000*Zr/TiO2') // '10000 × Zr/TiO₂'
 * @example expressionText('(La/Sm)N') // '(La/Sm)ɴ'
 */
export function expressionText(expression: string): string {
  const kept: string[] = [];
  const keep = (text: string) => `\u0001${String.fromCharCode(0xe000 + kept.push(text) - 1)}`;
  const written = expression
    .trim()
    .replace(/\[([^\]]+)\]/g, (_, name: string) => keep(symbolText(name)))
    .replace(/\b(FeO|Fe2O3)\*(?=\s*(?:[-+*/^),]|$))/g, (_, oxide: string) => keep(`${symbolText(oxide)}*`))
    .replace(/([A-Z][a-z]?)_?N(?![A-Za-z0-9_])/g, (whole, element: string) =>
      findAnalyte(whole) === undefined && findAnalyte(element) !== undefined ? keep(element + normalisedMark) : whole,
    )
    .replace(/\)_?N(?![A-Za-z0-9_])/g, () => `)${keep(normalisedMark)}`)
    .replace(symbolPattern, (symbol) => keep(symbolText(symbol)))
    .replace(/\blog10\b/g, 'log₁₀')
    .replace(/\s*\*\*?\s*/g, ' × ')
    .replace(/\s*\+\s*/g, ' + ')
    .replace(/(?<=[^\s(,×+/])\s*-\s*(?![a-z])/g, ' − ')
    .replace(/\^(\d)(?!\d)/g, (_, digit: string) => raised(digit));
  return written.replace(/\u0001(.)/gu, (_, code: string) => kept[code.charCodeAt(0) - 0xe000]);
}

const oxidePattern = new RegExp(`(?<![A-Za-z0-9_])(?:${escaped.filter((symbol) => /\d|FeOT/.test(symbol)).join('|')})(?![A-Za-z0-9])`, 'g');

/** A sentence with its oxides and isotope ratios set as print sets them; everything else is left alone. */
export function dressText(sentence: string): string {
  return sentence.replace(oxidePattern, symbolText);
}

/** A finished text with the few characters replaced that the shipped font lacks. */
export function drawable(text: string): string {
  return text.replaceAll('ₙ', normalisedMark);
}

/** A unit as print sets it. */
export function unitText(unit: string): string {
  return unit === 'wt%' ? 'wt %' : unit;
}

/**
 * An axis title: quantity, and in brackets its unit and basis.
 *
 * @param what a symbol or an expression over symbols
 * @param unit '' for a bare number
 * @param basis e.g. `volatile-free`; left out for bare numbers that no basis changes
 * @example axisTitle('SiO2', 'wt%', 'volatile-free') // 'SiO₂ (wt %, volatile-free)'
 */
export function axisTitle(what: string, unit = '', basis = ''): string {
  return bracketed(expressionText(what), unit, basis);
}

/** A finished title with unit and basis in brackets behind it. */
export function bracketed(title: string, unit: string, basis: string): string {
  const inside = [unitText(unit), basis].filter((part) => part !== '').join(', ');
  return inside === '' ? title : `${title} (${inside})`;
}

/** A number for a label or a caption: real minus sign. */
export function numberText(value: number, digits = 4): string {
  return String(Number(value.toPrecision(digits))).replace('-', '−');
}
