import jsep from 'jsep';
import { findAnalyte, knownAnalytes } from '../chemistry';

/** One node of a parsed expression: ordinary arithmetic over columns. */
export type ExpressionNode =
  | { readonly kind: 'number'; readonly value: number }
  | { readonly kind: 'column'; readonly symbol: string; readonly normalised: boolean }
  | { readonly kind: 'negate'; readonly of: ExpressionNode }
  | { readonly kind: 'binary'; readonly operator: '+' | '-' | '*' | '/' | '^'; readonly left: ExpressionNode; readonly right: ExpressionNode }
  | { readonly kind: 'call'; readonly name: FunctionName; readonly arguments: readonly ExpressionNode[] };

export type FunctionName = 'log10' | 'ln' | 'exp' | 'sqrt' | 'abs' | 'min' | 'max';

const functionNames: readonly FunctionName[] = ['log10', 'ln', 'exp', 'sqrt', 'abs', 'min', 'max'];

/** A fault in an expression: the message holds the expression, the offending piece, and what is allowed. */
export class ExpressionError extends Error {
  override readonly name = 'ExpressionError';
}

// Powers are written ^ (or **) and bind tighter than a product; jsep's own ^ is a bit operation that nothing here uses.
jsep.removeBinaryOp('^');
jsep.addBinaryOp('^', 11, true);
jsep.removeBinaryOp('**');
jsep.addBinaryOp('**', 11, true);

/** Spellings of total iron and water that end in an operator sign: a sign is part of the name when no operand follows it. */
const signedSymbols: readonly (readonly [RegExp, string])[] = [
  [/FeO\*(?=\s*(?:[-+*/^),]|$))/g, 'FeOT'],
  [/Fe2O3\*(?=\s*(?:[-+*/^),]|$))/g, 'Fe2O3T'],
  [/H2O[+](?=\s*(?:[-+*/^),]|$))/g, '[H2O+]'],
  [/H2O-(?=\s*(?:[-+*/^),]|$))/g, '[H2O-]'],
];

const hyphenated = knownAnalytes.map(({ symbol }) => symbol).filter((symbol) => /[a-z]-[A-Z]/.test(symbol));

/** Replaces `(…)N` by `normalised(…)`: the trailing N that means "divided by the reference composition". */
function readNormalisation(written: string): string {
  let text = written;
  for (;;) {
    const end = /\)_?N(?![A-Za-z0-9_])/.exec(text);
    if (end === null) return text;
    let depth = 0;
    let start = end.index;
    for (; start >= 0; start--) {
      if (text[start] === ')') depth++;
      if (text[start] === '(' && --depth === 0) break;
    }
    if (start < 0) throw new ExpressionError(`"${written}" is not a readable expression: a bracket that ends in ")N" is never opened.`);
    text = `${text.slice(0, start)}normalised${text.slice(start, end.index + 1)}${text.slice(end.index + end[0].length)}`;
  }
}

/**
 * Parses ordinary arithmetic over column symbols.
 *
 * Allowed: numbers, `+ - * / ^`, brackets, log10 ln exp sqrt abs min max; column symbols (`Ba`, `Al2O3`, `FeO*`, `87Sr/86Sr`); any other
 * column name in square brackets; `LaN`, `La_N` or `(La/Sm)N` for values divided by a reference composition.
 *
 * @param text the expression
 * @param named expressions that may be used by name, e.g. `{ 'Eu/Eu*': 'EuN/sqrt(SmN*GdN)' }`
 * @throws ExpressionError naming the offending piece
 */
export function parseExpression(text: string, named: Readonly<Record<string, string>> = {}): ExpressionNode {
  if (typeof text !== 'string' || text.trim() === '') throw new ExpressionError('An expression is a text such as "Ba/Th" or "10000*Zr/TiO2"; this one is empty.');
  let written = text;
  for (const name of Object.keys(named).sort((a, b) => b.length - a.length)) written = written.replaceAll(name, `(${named[name]})`);

  const quoted: string[] = [];
  const keep = (symbol: string) => `$${quoted.push(symbol) - 1}`;
  for (const [pattern, symbol] of signedSymbols) written = written.replace(pattern, symbol);
  written = written.replace(/\[([^\]]+)\]/g, (_, name: string) => keep(name.trim()));
  written = written.replace(/\b\d+[A-Z][a-z]?\/\d+[A-Z][a-z]?\b/g, keep);
  for (const symbol of hyphenated) written = written.replaceAll(symbol, () => keep(symbol));
  written = readNormalisation(written);

  let tree: jsep.Expression;
  try {
    tree = jsep(written);
  } catch (error) {
    throw new ExpressionError(`"${text}" is not a readable expression: ${(error as Error).message}.`);
  }
  return build(tree, false, { text, quoted });
}

/** An element symbol with the N of normalisation behind it (`LaN`, `La_N`), or undefined. */
function normalisedElement(name: string): string | undefined {
  const match = /^([A-Z][a-z]?)_?N$/.exec(name);
  return match !== null && findAnalyte(name) === undefined && findAnalyte(match[1])?.kind === 'element' ? match[1] : undefined;
}

function build(node: jsep.Expression, normalised: boolean, from: { text: string; quoted: readonly string[] }): ExpressionNode {
  const fail = (piece: string): never => {
    throw new ExpressionError(`"${from.text}": ${piece}. Allowed are numbers, column symbols, + - * / ^, brackets, and ${functionNames.join(', ')}.`);
  };
  switch (node.type) {
    case 'Literal': {
      const { value, raw } = node as jsep.Literal;
      return typeof value === 'number' ? { kind: 'number', value } : fail(`${raw} is not a number`);
    }
    case 'Identifier': {
      const { name } = node as jsep.Identifier;
      const quotedSymbol = name.startsWith('$') ? from.quoted[Number(name.slice(1))] : undefined;
      if (quotedSymbol !== undefined) return { kind: 'column', symbol: quotedSymbol, normalised };
      const element = normalisedElement(name);
      return element === undefined ? { kind: 'column', symbol: name, normalised } : { kind: 'column', symbol: element, normalised: true };
    }
    case 'UnaryExpression': {
      const { operator, argument } = node as jsep.UnaryExpression;
      const of = build(argument, normalised, from);
      return operator === '-' ? { kind: 'negate', of } : operator === '+' ? of : fail(`the sign ${operator} has no meaning here`);
    }
    case 'BinaryExpression': {
      const { operator, left, right } = node as jsep.BinaryExpression;
      const sign = operator === '**' ? '^' : operator;
      if (sign !== '+' && sign !== '-' && sign !== '*' && sign !== '/' && sign !== '^') return fail(`the operator ${operator} has no meaning here`);
      // The parser does not tell −x^2 from (−x)^2, so neither is guessed.
      if (sign === '^' && left.type === 'UnaryExpression') return fail('a signed base of a power can be read in two ways; write -(x^2), or multiply by hand');
      return { kind: 'binary', operator: sign, left: build(left, normalised, from), right: build(right, normalised, from) };
    }
    case 'CallExpression': {
      const call = node as jsep.CallExpression;
      const name = call.callee.type === 'Identifier' ? (call.callee as jsep.Identifier).name : '';
      if (name === 'normalised' && call.arguments.length === 1) return build(call.arguments[0], true, from);
      const known = functionNames.find((each) => each === name);
      if (known === undefined) return fail(`there is no function "${name || 'of that kind'}"`);
      const wanted = known === 'min' || known === 'max' ? 2 : 1;
      if (call.arguments.length !== wanted) return fail(`${known} takes ${wanted} argument${wanted === 1 ? '' : 's'}, not ${call.arguments.length}`);
      return { kind: 'call', name: known, arguments: call.arguments.map((argument) => build(argument, normalised, from)) };
    }
    default:
      return fail('two expressions stand side by side, or a construct is not arithmetic');
  }
}

/** The column symbols that an expression reads, each once, in order of appearance. */
export function expressionSymbols(node: ExpressionNode): readonly string[] {
  const symbols = new Set<string>();
  const walk = (at: ExpressionNode): void => {
    if (at.kind === 'column') symbols.add(at.symbol);
    else if (at.kind === 'negate') walk(at.of);
    else if (at.kind === 'binary') [at.left, at.right].forEach(walk);
    else if (at.kind === 'call') at.arguments.forEach(walk);
  };
  walk(node);
  return [...symbols];
}
