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
    return expressionSymbols(parseExpression(expression, this.named));
  }

  /** The values of an expression, each distinct one evaluated once; undefined when the suite lacks a column that it needs. */
  quantity(expression: string): Column | undefined {
    if (!this.quantities.has(expression)) this.quantities.set(expression, this.evaluated(expression, false));
    return this.quantities.get(expression);
  }

  private evaluated(expression: string, sigma: boolean): Column | undefined {
    const { suite, operand } = this.ground;
    if (this.symbols(expression).some((symbol) => operand(symbol) === undefined)) return undefined;
    return evaluate(suite, expression, { named: this.named, reference: this.normal, operand, sigma });
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
    // The margin is positive on the side where the condition holds, so one rule serves every comparison.
    const margin = is === '>' || is === '>=' ? `(${expression})-(${limit})` : `(${limit})-(${expression})`;
    const column = this.evaluated(margin, true);
    const out = new Uint8Array(size).fill(finding.missing);
    if (column === undefined) return out;
    const { values, states, sigma, limits } = column;
    const orEqual = is.length === 2;
    let opposite: Column | undefined;
    for (let i = 0; i < size; i++) {
      const value = values[i];
      if (value === value) {
        const met = orEqual ? value >= 0 : value > 0;
        out[i] = sigma !== undefined && sigma[i] > 0 && Math.abs(value) <= sigma[i] ? finding.near : met ? finding.met : finding.notMet;
        continue;
      }
      const state = states[i];
      if (state !== cellState.belowDetection && state !== cellState.aboveRange) continue;
      const bound = limits![i];
      if (state === cellState.belowDetection && bound <= 0) out[i] = finding.notMetByBound;
      else if (state === cellState.aboveRange && bound >= 0) out[i] = finding.metByBound;
      else {
        // An expression may be bounded at both ends, and a column keeps one: the other is read off the negated margin.
        opposite ??= this.evaluated(`-(${margin})`, false)!;
        const other = opposite.states[i] === cellState.belowDetection ? -opposite.limits![i] : NaN;
        out[i] = state === cellState.belowDetection && other >= 0 ? finding.metByBound : this.censoredKind(expression, limit, i);
      }
    }
    return out;
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
  const order = [finding.met, finding.metByBound, finding.near, finding.belowUndecided, finding.aboveUndecided, finding.missing, finding.notMetByBound, finding.notMet];
  return Array.from({ length: order.length }, (_, code) => order.findIndex((each) => each === code));
})();
