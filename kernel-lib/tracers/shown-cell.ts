import { formatNumber, type TableCell } from '../display';
import { cellState } from '../suite';

/** A computed cell as a reader sees it, to four digits: the number, `<limit`, `>limit`, or nothing. */
export function shownCell(values: Float64Array, states: Uint8Array, limits: Float64Array | undefined, row: number): TableCell {
  const state = states[row];
  if (state === cellState.missing) return null;
  const short = (value: number) => Number(value.toPrecision(4));
  if (state === cellState.belowDetection) return `<${formatNumber(short(limits?.[row] ?? NaN))}`;
  if (state === cellState.aboveRange) return `>${formatNumber(short(limits?.[row] ?? NaN))}`;
  return short(values[row]);
}
