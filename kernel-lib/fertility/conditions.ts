import { cellState, evaluate, expressionSymbols, parseExpression, type Column, type Suite } from '../suite';
import { reservoir } from '../tables';
import { indicatorLanguage, type FertilityCondition } from './tables';

/** @internal What one condition, or a set of them, says of a sample. */
export const finding = { met: 0, notMet: 1, near: 2, belowUndecided: 3, aboveUndecided: 4, missing: 5, metByBound: 6, notMetByBound: 7 } as const;

/** @internal Where the conditions' operands come from. */
export interface Ground {
  readonly suite: Suite;
  readonly operand: (symbol: string) => Column | undefined;
}

/** @internal Evaluates conditions on whole columns, each distinct one once. */
export class ConditionReader {
  private readonly findings = new Map<string, Uint8Array>();
  private readonly read = new Map<string, readonly string[]>();
  private readonly quantities = new Map<string, Column | undefined>();
  private readonly named = indicatorLanguage().named;
  private readonly normal: (symbol: string) => number;

  constructor(private readonly ground: Ground) {
    const { values } = reservoir(indicatorLanguage().reference);
    this.normal = (symbol) => values.get(symbol)?.value ?? NaN;
  }

  /** The column behind a symbol on this basis, or undefined when the suite holds no form of it. */
  column(symbol: string): Column | undefined {
    return this.ground.operand(symbol);
  }

  /** The symbols an expression reads, named expressions written out. */
  symbols(expression: string): readonly string[] {
    let known = this.read.get(expression);
    if (known === undefined) this.read.set(expression, (known = expressionSymbols(parseExpression(expression, this.named))));
    return known;
  }

  /** The values of an expression with 1σ and bounds, each distinct one evaluated once; undefined when the suite lacks a column that it needs. */
  quantity(expression: string): Column | undefined {
    if (!this.quantities.has(expression)) this.quantities.set(expression, this.evaluated(expression));
    return this.quantities.get(expression);
  }

  private evaluated(expression: string): Column | undefined {
    const { suite, operand } = this.ground;
    if (this.symbols(expression).some((symbol) => operand(symbol) === undefined)) return undefined;
    return evaluate(suite, expression, { named: this.named, reference: this.normal, operand });
  }

  /** What a condition says of every sample: one number of `finding` each. */
  ask({ expression, is, limit }: FertilityCondition): Uint8Array {
    const key = `${expression} ${is} ${limit}`;
    let found = this.findings.get(key);
    if (found === undefined) this.findings.set(key, (found = this.find(expression, is, limit)));
    return found;
  }

  /** What a set of conditions says when all must hold: one that fails settles it, whatever the others lack. */
  askAll(conditions: readonly FertilityCondition[]): Uint8Array {
    const size = this.ground.suite.size;
    if (conditions.length === 1) return this.ask(conditions[0]);
    const all = conditions.map((each) => this.ask(each));
    const out = new Uint8Array(size);
    for (let i = 0; i < size; i++) {
      let worst: number = finding.met;
      let rank = 0;
      for (const each of all) {
        const order = precedence[each[i]];
        if (order > rank) {
          rank = order;
          worst = each[i];
        }
      }
      out[i] = worst;
    }
    return out;
  }

  private find(expression: string, is: FertilityCondition['is'], limit: string): Uint8Array {
    const size = this.ground.suite.size;
    const out = new Uint8Array(size).fill(finding.missing);
    // A limit that runs over another quantity makes one margin of both, so that the errors of all operands are in it.
    const plain = Number(limit);
    const asked = Number.isNaN(plain) ? `(${expression})-(${limit})` : expression;
    const at = Number.isNaN(plain) ? 0 : plain;
    const column = this.quantity(asked);
    if (column === undefined) return out;
    const { values, states, sigma, limits } = column;
    const side = is === '>' || is === '>=' ? 1 : -1;
    const orEqual = is.length === 2;
    for (let i = 0; i < size; i++) {
      const value = values[i];
      if (value === value) {
        // Positive on the side where the condition holds.
        const margin = side * (value - at);
        const met = orEqual ? margin >= 0 : margin > 0;
        out[i] = sigma !== undefined && sigma[i] > 0 && Math.abs(margin) <= sigma[i] ? finding.near : met ? finding.met : finding.notMet;
        continue;
      }
      const state = states[i];
      if (state !== cellState.belowDetection && state !== cellState.aboveRange) continue;
      const below = state === cellState.belowDetection;
      const decided = below ? (limits![i] <= at ? -side : this.lowEnd(asked, i) >= at ? side : 0) : limits![i] >= at ? side : 0;
      out[i] = decided > 0 ? finding.metByBound : decided < 0 ? finding.notMetByBound : this.censoredKind(expression, limit, i);
    }
    return out;
  }

  /** The low end of a quantity that a column holds by its high end alone: read off the negated quantity. */
  private lowEnd(expression: string, row: number): number {
    const opposite = this.quantity(`-(${expression})`)!;
    return opposite.states[row] === cellState.belowDetection ? -opposite.limits![row] : -Infinity;
  }

  /** Which kind of bound left a sample undecided, by its first censored operand. */
  private censoredKind(expression: string, limit: string, row: number): number {
    for (const symbol of [...this.symbols(expression), ...this.symbols(limit)]) {
      if (this.ground.operand(symbol)?.states[row] === cellState.belowDetection) return finding.belowUndecided;
    }
    return finding.aboveUndecided;
  }
}

/** How strongly a finding settles "all must hold", by its number. */
const precedence: readonly number[] = (() => {
  const order = [
    finding.met,
    finding.metByBound,
    finding.near,
    finding.belowUndecided,
    finding.aboveUndecided,
    finding.missing,
    finding.notMetByBound,
    finding.notMet,
  ];
  return Array.from({ length: order.length }, (_, code) => order.findIndex((each) => each === code));
})();
