import type { Suite } from '../suite';

/** Rows of each group of a label, in order of first appearance; without a label, all rows under ''. */
export function groupRows(suite: Suite, label: string | undefined): ReadonlyMap<string, Int32Array> {
  if (label === undefined) return new Map([['', Int32Array.from({ length: suite.size }, (_, i) => i)]]);
  const groups = new Map<string, number[]>();
  suite.label(label).forEach((text, i) => {
    const rows = groups.get(text);
    if (rows === undefined) groups.set(text, [i]);
    else rows.push(i);
  });
  return new Map([...groups].map(([name, rows]) => [name, Int32Array.from(rows)]));
}
