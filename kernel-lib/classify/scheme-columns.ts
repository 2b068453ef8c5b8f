import type { Column, Suite } from '../suite';
import { axisValues, operandsOf, type IronBasis } from './axes';
import type { Scheme } from './scheme';

/**
 * The axes of a scheme for every sample with their 1σ, for drawing errors; a triangle's corners are given as they are, not closed.
 *
 * @param suite n samples, as analysed or already volatile-free
 * @param scheme the scheme
 * @param iron iron in the volatile-free sum (default `measured`)
 * @returns one column (n) an axis; undefined where the suite lacks what the axis reads
 */
export function schemeColumns(suite: Suite, scheme: Scheme, iron: IronBasis = 'measured'): readonly (Column | undefined)[] {
  const operands = operandsOf(suite, iron);
  return scheme.axes.map(({ expression }) => axisValues(operands, expression, scheme.basis, true).column);
}
