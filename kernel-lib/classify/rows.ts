import type { Suite } from '../suite';

/** The row of a sample, by name or number. */
export function rowOf(suite: Suite, sample: string | number, by: string): number {
  if (typeof sample === 'number') {
    if (!Number.isInteger(sample) || sample < 0 || sample >= suite.size)
      throw new RangeError(`${by}: row ${sample} is not in this suite; rows are 0 to ${suite.size - 1}.`);
    return sample;
  }
  const first = suite.samples.indexOf(sample);
  if (first < 0) throw new RangeError(`${by}: there is no sample "${String(sample)}". The first names are: ${suite.samples.slice(0, 8).join(', ')}.`);
  if (suite.samples.indexOf(sample, first + 1) >= 0) throw new RangeError(`${by}: "${sample}" names more than one row; give the row number instead.`);
  return first;
}
