import { cellState, type Column } from '../suite';
import { axisValues, type Operands } from './axes';
import type { RemarkBook } from './remarks';
import type { Comparison, Scheme, SchemeCondition } from './scheme';

/** Whether a value meets a comparison. */
export function meets(value: number, is: Comparison, limit: number | readonly [number, number]): boolean {
  if (typeof limit !== 'number') return value >= limit[0] && value <= limit[1];
  return is === '<' ? value < limit : is === '<=' ? value <= limit : is === '>' ? value > limit : value >= limit;
}

/**
 * How a condition comes out on every row: 1 met, 0 not met, −1 not known. A below-detection or above-range value decides where its bound
 * does.
 */
export function outcomes(operands: Operands, condition: SchemeCondition): Int8Array {
  const met = new Int8Array(operands.suite.size).fill(-1);
  const { column } = axisValues(operands, condition.expression, condition.basis);
  if (column === undefined) return met;
  for (let i = 0; i < met.length; i++) met[i] = outcome(column, i, condition);
  return met;
}

function outcome({ values, states, limits }: Column, i: number, { is, value }: SchemeCondition): -1 | 0 | 1 {
  if (Number.isFinite(values[i])) return meets(values[i], is, value) ? 1 : 0;
  const limit = limits?.[i] ?? NaN;
  if (Number.isNaN(limit) || states[i] === cellState.missing) return -1;
  // The value lies somewhere from the limit outwards: decided only when both ends of that range say the same.
  const far = states[i] === cellState.belowDetection ? -Infinity : Infinity;
  const near = meets(limit, is, value);
  return near === meets(far, is, value) && typeof value === 'number' ? (near ? 1 : 0) : -1;
}

/** The scheme's conditions of use: outside them an answer is withdrawn or gets a remark. */
export function applyConditions(operands: Operands, scheme: Scheme, field: Int16Array, distance: Float64Array, book: RemarkBook): void {
  for (const condition of scheme.conditions) {
    const met = outcomes(operands, condition);
    for (let i = 0; i < met.length; i++) {
      if (field[i] < 0 || met[i] === 1) continue;
      if (met[i] === -1) {
        book.note(i, `not checked: ${condition.text}`);
        continue;
      }
      if (condition.otherwise === 'refuse') {
        field[i] = -1;
        distance[i] = NaN;
      }
      book.note(i, `outside its use: ${condition.text}`);
    }
  }
}
