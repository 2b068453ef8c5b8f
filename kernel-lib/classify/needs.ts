import { expressionSymbols, parseExpression } from '../suite';
import type { Scheme } from './scheme';

/** Every symbol that a scheme reads to give its answer. */
export function schemeNeeds(scheme: Scheme): readonly string[] {
  const asked = scheme.kind === 'criteria' ? scheme.criteria : scheme.kind === 'thresholds' ? [scheme.axes[1]] : scheme.axes;
  const symbols = asked.flatMap(({ expression }) => expressionSymbols(parseExpression(expression)));
  return [...new Set(symbols.map((symbol) => symbol.replace(/^(mol|cation) /, '')))];
}
