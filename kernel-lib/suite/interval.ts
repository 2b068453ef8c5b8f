import type { ExpressionNode } from './expression-parse';

/** A value known only to lie between two bounds, ends included. */
export interface Interval {
  readonly low: number;
  readonly high: number;
}

const everything: Interval = { low: -Infinity, high: Infinity };
const ofNumbers = (...numbers: number[]): Interval => (numbers.some(Number.isNaN) ? everything : { low: Math.min(...numbers), high: Math.max(...numbers) });
/** 0 × ∞ counts as 0: an unbounded but finite value times an exact zero is zero. */
const times = (a: number, b: number): number => (a === 0 || b === 0 ? 0 : a * b);

function product(a: Interval, b: Interval): Interval {
  return ofNumbers(times(a.low, b.low), times(a.low, b.high), times(a.high, b.low), times(a.high, b.high));
}

function reciprocal({ low, high }: Interval): Interval {
  if (low > 0 || high < 0) return ofNumbers(1 / low, 1 / high);
  if (low === 0 && high > 0) return { low: 1 / high, high: Infinity };
  if (high === 0 && low < 0) return { low: -Infinity, high: 1 / low };
  return everything;
}

function power(base: Interval, exponent: Interval): Interval {
  if (base.low < 0) return exponent.low === exponent.high && Number.isInteger(exponent.low) && base.low === base.high ? ofNumbers(base.low ** exponent.low) : everything;
  return ofNumbers(base.low ** exponent.low, base.low ** exponent.high, base.high ** exponent.low, base.high ** exponent.high);
}

const monotonic: Readonly<Record<string, (value: number) => number>> = {
  log10: (value) => Math.log10(Math.max(0, value)),
  ln: (value) => Math.log(Math.max(0, value)),
  exp: Math.exp,
  sqrt: (value) => Math.sqrt(Math.max(0, value)),
};

/** The bounds of an expression when its operands are known only within bounds (interval arithmetic). */
export function boundsOf(node: ExpressionNode, operand: (column: ExpressionNode & { kind: 'column' }) => Interval): Interval {
  switch (node.kind) {
    case 'number':
      return { low: node.value, high: node.value };
    case 'column':
      return operand(node);
    case 'negate': {
      const of = boundsOf(node.of, operand);
      return { low: -of.high, high: -of.low };
    }
    case 'binary': {
      const left = boundsOf(node.left, operand);
      const right = boundsOf(node.right, operand);
      if (node.operator === '+') return { low: left.low + right.low, high: left.high + right.high };
      if (node.operator === '-') return { low: left.low - right.high, high: left.high - right.low };
      if (node.operator === '*') return product(left, right);
      if (node.operator === '/') return product(left, reciprocal(right));
      return power(left, right);
    }
    case 'call': {
      const [first, second] = node.arguments.map((argument) => boundsOf(argument, operand));
      if (node.name === 'min') return { low: Math.min(first.low, second.low), high: Math.min(first.high, second.high) };
      if (node.name === 'max') return { low: Math.max(first.low, second.low), high: Math.max(first.high, second.high) };
      if (node.name === 'abs') {
        const ends = ofNumbers(Math.abs(first.low), Math.abs(first.high));
        return first.low <= 0 && first.high >= 0 ? { low: 0, high: ends.high } : ends;
      }
      return { low: monotonic[node.name](first.low), high: monotonic[node.name](first.high) };
    }
  }
}
