import { suiteOf, type Column, type Suite } from '../suite';
import { axisValues, type Operands } from './axes';
import type { Scheme } from './scheme';

/** The suite without 1σ, one column replaced: what a moved analysis looks like. */
export function bareSuite(raw: Suite, replaced: ReadonlyMap<string, Float64Array>): Suite {
  const columns = [...raw.columns.values()].map(({ sigma: _sigma, ...each }): Column =>
    replaced.has(each.symbol) ? { ...each, values: replaced.get(each.symbol)! } : each,
  );
  return suiteOf({ columns, labels: raw.labels });
}

/** x and y of a scheme in the plane where its outlines are straight. */
export function planeColumns(operands: Operands, scheme: Scheme): { x: Float64Array; y: Float64Array } | undefined {
  const { size } = operands.suite;
  if (scheme.kind === 'thresholds') {
    const { column } = axisValues(operands, scheme.axes[1].expression, scheme.basis);
    if (column === undefined) return undefined;
    return { x: new Float64Array(size), y: scheme.axes[1].scale === 'log' ? column.values.map(Math.log10) : column.values };
  }
  const columns = scheme.axes.map(({ expression }) => axisValues(operands, expression, scheme.basis).column);
  if (columns.some((column) => column === undefined)) return undefined;
  const [a, b, c] = columns.map((column) => column!.values);
  const x = new Float64Array(size);
  const y = new Float64Array(size);
  if (scheme.plane === 'ternary') {
    const halfRootThree = Math.sqrt(3) / 2;
    for (let i = 0; i < size; i++) {
      const sum = a[i] + b[i] + c[i];
      x[i] = 100 - (100 * a[i]) / sum - (50 * b[i]) / sum;
      y[i] = ((100 * b[i]) / sum) * halfRootThree;
    }
    return { x, y };
  }
  const logX = scheme.axes[0].scale === 'log';
  const logY = scheme.axes[1].scale === 'log';
  for (let i = 0; i < size; i++) {
    x[i] = logX ? Math.log10(a[i]) : a[i];
    y[i] = logY ? Math.log10(b[i]) : b[i];
  }
  return { x, y };
}
