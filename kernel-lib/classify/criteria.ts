import { axisValues, whyMissing, type Operands } from './axes';
import { outcomes } from './conditions';
import type { RemarkBook } from './remarks';
import type { Scheme } from './scheme';
import type { CriterionOutcome } from './verdicts';

/** Field 0 when every required criterion is met, 1 when one fails, none when one is unknown and none fails. */
export function judgeCriteria(operands: Operands, scheme: Scheme, field: Int16Array, book: RemarkBook): readonly CriterionOutcome[] {
  const found = scheme.criteria.map((criterion): CriterionOutcome => ({
    criterion,
    met: outcomes(operands, criterion),
    values: axisValues(operands, criterion.expression, criterion.basis).column?.values,
  }));
  for (let i = 0; i < field.length; i++) {
    const failed: string[] = [];
    const unknown: CriterionOutcome[] = [];
    const unusual: string[] = [];
    for (const each of found) {
      if (each.met[i] === 1) continue;
      if (each.criterion.weight === 'usual') {
        if (each.met[i] === 0) unusual.push(each.criterion.text);
      } else if (each.met[i] === 0) failed.push(each.criterion.text);
      else unknown.push(each);
    }
    field[i] = failed.length > 0 ? 1 : unknown.length > 0 ? -1 : 0;
    if (failed.length > 0) book.note(i, `fails ${failed.join(', ')}`);
    else if (unknown.length > 0) {
      const why = unknown.map(({ criterion }) =>
        whyMissing(operands, [axisValues(operands, criterion.expression, criterion.basis)], criterion.basis, i),
      );
      book.note(i, [...new Set(why)].join('; '));
    } else if (unusual.length > 0) book.note(i, `met, though not as usual: ${unusual.join(', ')}`);
  }
  return found;
}
