import { isMassUnit, massUnitFactor } from '../chemistry';
import { cellState, derivedColumn, type Column } from './column';
import { ExpressionError, expressionSymbols, parseExpression, type ExpressionNode, type FunctionName } from './expression-parse';
import { boundsOf } from './interval';
import { resolveColumn } from './resolve';
import type { Suite } from './suite';

export { ExpressionError, expressionSymbols, parseExpression, type ExpressionNode, type FunctionName } from './expression-parse';

/** How an expression is evaluated. */
export interface EvaluateOptions {
  /** Symbol of the resulting column (default: the expression as written). */
  readonly symbol?: string;
  /** Expressions that may be used by name. */
  readonly named?: Readonly<Record<string, string>>;
  /** The reference value that a normalised analyte is divided by, in the analyte's canonical unit. */
  readonly reference?: (symbol: string) => number;
  /** Whether 1σ is carried through where the operands have it (default true). */
  readonly sigma?: boolean;
  /** Where the operands come from (default: the suite's columns and their equivalents). */
  readonly operand?: (symbol: string) => Column | undefined;
}

const parsed = new WeakMap<object, Map<string, ExpressionNode>>();
const unnamed = {};

function parseOnce(text: string, named: Readonly<Record<string, string>> | undefined): ExpressionNode {
  const key = named ?? unnamed;
  let known = parsed.get(key);
  if (known === undefined) parsed.set(key, (known = new Map()));
  let node = known.get(text);
  if (node === undefined) known.set(text, (node = parseExpression(text, named)));
  return node;
}

/**
 * Evaluates ordinary arithmetic on whole columns.
 *
 * Mass fractions in different units (wt % and ppm) are converted to wt % before they are added, subtracted or divided, so `10000*Zr/TiO2`
 * is Zr in ppm over TiO2 in wt %. 1σ is propagated to first order, operands taken as independent of each other. A below-detection or
 * above-range operand gives a bounded result (`<` or `>` with its limit) where the bounds allow one, else a missing cell.
 *
 * @param suite n samples
 * @param text the expression; see `parseExpression` for what may be written
 * @returns a column of n cells, kind `quantity`; unit '' for ratios
 * @throws ExpressionError for an unreadable expression, an operand the suite lacks, or units that cannot be added
 * @example evaluate(suite, 'Ba/Th').values
 */
export function evaluate(suite: Suite, text: string, options: EvaluateOptions = {}): Column {
  const tree = parseOnce(text, options.named);
  const symbols = expressionSymbols(tree);
  const operands = new Map<string, Column>();
  const missing: string[] = [];
  const find = options.operand ?? ((symbol: string) => resolveColumn(suite, symbol));
  for (const symbol of symbols) {
    const found = find(symbol);
    if (found === undefined) missing.push(symbol);
    else operands.set(symbol, found);
  }
  if (missing.length > 0) throw new ExpressionError(`"${text}" needs ${missing.join(', ')}, which this suite does not hold. It holds: ${suite.analytes.join(', ')}.`);

  const bound = bind(tree, { text, operands, reference: options.reference });
  const values = run(bound.node, (symbol) => operands.get(symbol)!.values, suite.size);
  const sigma = options.sigma === false ? undefined : propagate(bound.node, operands, suite.size);
  const result = derivedColumn(options.symbol ?? text, values, bound.unit, sigma);
  return withBounds(result, bound.node, operands);
}

/** A node with units resolved: normalised columns divided by their reference, unit conversions written as factors. */
interface Bound {
  readonly node: ExpressionNode;
  /** Unit base ('' for a bare number) and its power. */
  readonly base: string;
  readonly power: number;
  readonly unit: string;
}

interface BindContext {
  readonly text: string;
  readonly operands: ReadonlyMap<string, Column>;
  readonly reference?: (symbol: string) => number;
}

const unitText = (base: string, power: number): string => (base === '' || power === 0 ? '' : power === 1 ? base : `${base}^${power}`);
const boundAs = (node: ExpressionNode, base: string, power: number): Bound => ({ node, base: power === 0 ? '' : base, power, unit: unitText(base, power) });
const timesNumber = (node: ExpressionNode, factor: number): ExpressionNode =>
  factor === 1 ? node : { kind: 'binary', operator: '*', left: node, right: { kind: 'number', value: factor } };

function bind(node: ExpressionNode, context: BindContext): Bound {
  switch (node.kind) {
    case 'number':
      return boundAs(node, '', 0);
    case 'column': {
      const { unit } = context.operands.get(node.symbol)!;
      if (!node.normalised) return boundAs(node, unit, unit === '' ? 0 : 1);
      const reference = context.reference?.(node.symbol);
      if (reference === undefined || Number.isNaN(reference)) {
        throw new ExpressionError(`"${context.text}": ${node.symbol} is to be normalised, but the reference composition${context.reference === undefined ? ' is not given' : ` has no ${node.symbol}`}.`);
      }
      return boundAs({ kind: 'binary', operator: '/', left: { ...node, normalised: false }, right: { kind: 'number', value: reference } }, '', 0);
    }
    case 'negate': {
      const of = bind(node.of, context);
      return boundAs({ kind: 'negate', of: of.node }, of.base, of.power);
    }
    case 'call': {
      const of = node.arguments.map((argument) => bind(argument, context));
      const call: ExpressionNode = { ...node, arguments: of.map((argument) => argument.node) };
      if (node.name === 'sqrt') return boundAs(call, of[0].base, of[0].power / 2);
      return node.name === 'abs' || node.name === 'min' || node.name === 'max' ? boundAs(call, of[0].base, of[0].power) : boundAs(call, '', 0);
    }
    case 'binary':
      return bindBinary(node, context);
  }
}

function bindBinary(node: ExpressionNode & { kind: 'binary' }, context: BindContext): Bound {
  const { operator } = node;
  let left = bind(node.left, context);
  let right = bind(node.right, context);
  if (operator === '^') {
    const exponent = node.right.kind === 'number' ? node.right.value : undefined;
    return boundAs({ ...node, left: left.node, right: right.node }, left.base, exponent === undefined ? 0 : left.power * exponent);
  }
  if (left.base !== right.base && isMassUnit(left.base) && isMassUnit(right.base)) {
    const common = left.base === 'wt%' || right.base === 'wt%' ? 'wt%' : left.base;
    [left, right] = [left, right].map((side) => boundAs(timesNumber(side.node, massUnitFactor(side.base as 'ppm', common as 'ppm') ** side.power), common, side.power));
  }
  const joined: ExpressionNode = { ...node, left: left.node, right: right.node };
  if (operator === '+' || operator === '-') {
    // A bare number takes the unit of what it is added to, as published rules write it (Na2O − 2).
    if (left.power === 0) return boundAs(joined, right.base, right.power);
    if (right.power === 0) return boundAs(joined, left.base, left.power);
    if (left.base !== right.base || left.power !== right.power) {
      throw new ExpressionError(`"${context.text}": a quantity in ${left.unit} and one in ${right.unit} cannot be ${operator === '+' ? 'added' : 'subtracted'}.`);
    }
    return boundAs(joined, left.base, left.power);
  }
  const power = left.power + (operator === '*' ? right.power : -right.power);
  return boundAs(joined, left.base === '' ? right.base : right.base === '' || left.base === right.base ? left.base : `${left.unit}·${right.unit}`, power);
}

const functions: Readonly<Record<Exclude<FunctionName, 'min' | 'max'>, (value: number) => number>> = {
  log10: Math.log10, ln: Math.log, exp: Math.exp, sqrt: Math.sqrt, abs: Math.abs,
};

/** The values of a bound expression: one fresh array a node, each filled in one plain loop. */
function run(node: ExpressionNode, valuesOf: (symbol: string) => Float64Array, size: number): Float64Array {
  const result = runNode(node, valuesOf, size);
  if (typeof result === 'number') return new Float64Array(size).fill(result);
  return node.kind === 'column' ? result.slice() : result;
}

function runNode(node: ExpressionNode, valuesOf: (symbol: string) => Float64Array, size: number): Float64Array | number {
  switch (node.kind) {
    case 'number':
      return node.value;
    case 'column':
      return valuesOf(node.symbol);
    case 'negate': {
      const of = runNode(node.of, valuesOf, size);
      return typeof of === 'number' ? -of : of.map((value) => -value);
    }
    case 'binary':
      return combine(node.operator, runNode(node.left, valuesOf, size), runNode(node.right, valuesOf, size), size);
    case 'call': {
      const [first, second] = node.arguments.map((argument) => runNode(argument, valuesOf, size));
      if (node.name === 'min' || node.name === 'max') return combine(node.name, first, second, size);
      const apply = functions[node.name];
      if (typeof first === 'number') return apply(first);
      const out = new Float64Array(size);
      for (let i = 0; i < size; i++) out[i] = apply(first[i]);
      return out;
    }
  }
}

type Operator = '+' | '-' | '*' | '/' | '^' | 'min' | 'max';

const combineNumbers: Readonly<Record<Operator, (a: number, b: number) => number>> = {
  '+': (a, b) => a + b, '-': (a, b) => a - b, '*': (a, b) => a * b, '/': (a, b) => a / b, '^': (a, b) => a ** b, min: Math.min, max: Math.max,
};

function combine(operator: Operator, left: Float64Array | number, right: Float64Array | number, size: number): Float64Array | number {
  if (typeof left === 'number' && typeof right === 'number') return combineNumbers[operator](left, right);
  const out = new Float64Array(size);
  if (typeof left !== 'number' && typeof right !== 'number') {
    if (operator === '/') for (let i = 0; i < size; i++) out[i] = left[i] / right[i];
    else if (operator === '+') for (let i = 0; i < size; i++) out[i] = left[i] + right[i];
    else if (operator === '*') for (let i = 0; i < size; i++) out[i] = left[i] * right[i];
    else if (operator === '-') for (let i = 0; i < size; i++) out[i] = left[i] - right[i];
    else for (let i = 0, apply = combineNumbers[operator]; i < size; i++) out[i] = apply(left[i], right[i]);
    return out;
  }
  const apply = combineNumbers[operator];
  if (typeof left === 'number') for (let i = 0; i < size; i++) out[i] = apply(left, (right as Float64Array)[i]);
  else for (let i = 0; i < size; i++) out[i] = apply(left[i], right as number);
  return out;
}

/** Step of the central difference, in σ: small enough that curvature does not matter, large enough that rounding does not. */
const differenceStep = 1e-3;

/** First-order 1σ of the result: each operand is moved by ± a small part of its σ, whole columns at once. */
function propagate(node: ExpressionNode, operands: ReadonlyMap<string, Column>, size: number): Float64Array | undefined {
  let variance: Float64Array | undefined;
  for (const [moved, { values, sigma }] of operands) {
    if (sigma === undefined) continue;
    const shifted = (by: number) => {
      const column = new Float64Array(size);
      for (let i = 0; i < size; i++) column[i] = values[i] + by * sigma[i];
      return run(node, (symbol) => (symbol === moved ? column : operands.get(symbol)!.values), size);
    };
    const up = shifted(differenceStep);
    const down = shifted(-differenceStep);
    variance ??= new Float64Array(size);
    for (let i = 0; i < size; i++) {
      const slope = (up[i] - down[i]) / (2 * differenceStep);
      variance[i] += slope * slope;
    }
  }
  return variance?.map(Math.sqrt);
}

/** Gives the cells that rest on below-detection or above-range operands their bound, by interval arithmetic. */
function withBounds(result: Column, node: ExpressionNode, operands: ReadonlyMap<string, Column>): Column {
  const columns = [...operands.values()];
  const censored = columns.filter(({ limits }) => limits !== undefined);
  if (censored.length === 0) return result;
  const { values, states } = result;
  let limits: Float64Array | undefined;
  for (let i = 0; i < values.length; i++) {
    if (states[i] !== cellState.missing || !censored.some((each) => isCensored(each.states[i])) || columns.some((each) => each.states[i] === cellState.missing)) continue;
    const { low, high } = boundsOf(node, ({ symbol }) => {
      const at = operands.get(symbol)!;
      const limit = at.limits?.[i] ?? NaN;
      if (at.states[i] === cellState.belowDetection) return { low: 0, high: Number.isNaN(limit) ? Infinity : limit };
      if (at.states[i] === cellState.aboveRange) return { low: Number.isNaN(limit) ? 0 : limit, high: Infinity };
      return { low: at.values[i], high: at.values[i] };
    });
    // A bound of a positive quantity that only says "above zero" says nothing.
    const state = Number.isFinite(high) ? cellState.belowDetection : Number.isFinite(low) && low !== 0 ? cellState.aboveRange : cellState.missing;
    if (state === cellState.missing) continue;
    limits ??= new Float64Array(values.length).fill(NaN);
    states[i] = state;
    limits[i] = state === cellState.belowDetection ? high : low;
  }
  return limits === undefined ? result : { ...result, limits };
}

function isCensored(state: number): boolean {
  return state === cellState.belowDetection || state === cellState.aboveRange;
}
