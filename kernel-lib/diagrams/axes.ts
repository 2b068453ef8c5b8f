import { textWidth } from './font';
import { tidy, type Axis, type Frame, type VegaSpec } from './frame';
import { textSize } from './theme';

/** A number on a log axis, in full where that is short: 0.01, 0.1, 1, 10 … 100 000. */
function decadeText(value: number): string {
  if (value >= 1e6 || value < 1e-4) {
    const power = Math.round(Math.log10(value));
    const digits = String(Math.abs(power)).replace(/\d/g, (digit) => '⁰¹²³⁴⁵⁶⁷⁸⁹'[Number(digit)]);
    const lead = tidy(value / 10 ** power);
    return `${lead === 1 ? '' : `${lead} × `}10${power < 0 ? '⁻' : ''}${digits}`;
  }
  const text = String(tidy(value));
  return text.length > 4 && value >= 1e4 ? text.replace(/\B(?=(\d{3})+$)/g, ' ') : text;
}

interface LogTicks {
  /** All ticks: 1 to 9 of each decade. */
  readonly all: readonly number[];
  /** Those that carry a number. */
  readonly labelled: readonly number[];
}

/** Ticks at 1…9 of each decade; numbers at the decades, and at 2 and 5 (or more) where a decade is long enough in pixels. */
export function logTicks([low, high]: readonly [number, number], length: number): LogTicks {
  const all: number[] = [];
  for (let power = Math.floor(Math.log10(low)); power <= Math.ceil(Math.log10(high)); power++) {
    for (let digit = 1; digit < 10; digit++) {
      const value = tidy(digit * 10 ** power);
      if (value >= low * 0.999999 && value <= high * 1.000001) all.push(value);
    }
  }
  const digitOf = (value: number) => Math.round(value / 10 ** Math.floor(Math.log10(value) + 1e-9));
  const decade = length / Math.log10(high / low);
  const wanted = decade < 130 ? [1] : decade < 320 ? [1, 2, 5] : decade < 640 ? [1, 2, 3, 5, 7] : [1, 2, 3, 4, 5, 6, 7, 8, 9];
  return { all, labelled: all.filter((value) => wanted.includes(digitOf(value))) };
}

/** The `scale` of a position channel. */
export function scaleSpec(axis: Axis): VegaSpec {
  return {
    domain: [...axis.window],
    nice: false,
    ...(axis.scale === 'log' ? { type: 'log' } : { zero: false }),
    ...(axis.reversed === true ? { reverse: true } : {}),
  };
}

/** The `axis` of a position channel, or null. */
export function axisSpec(axis: Axis, length: number, side: 'x' | 'y'): VegaSpec | null {
  if (axis.shown === false) return null;
  // A title longer than its axis is broken, never cut.
  const title = breakTitle(axis.title, Math.max(length, 160) * 1.05);
  const common = { title, titleAnchor: 'middle', labelFlush: false, grid: axis.grid === true, gridColor: '#ececec' };
  if (axis.names !== undefined) {
    return {
      ...common,
      values: axis.names.map((_, i) => i),
      labelExpr: `${JSON.stringify(axis.names)}[datum.value]`,
      labelAngle: 0,
      labelOverlap: false,
      ticks: side === 'x',
      tickSize: 4,
    };
  }
  if (axis.ticks !== undefined && axis.tickNames !== undefined) {
    const names = Object.fromEntries(axis.ticks.map((tick, i) => [String(tick), axis.tickNames![i]]));
    return { ...common, values: [...axis.ticks], labelExpr: `${JSON.stringify(names)}[toString(datum.value)] || ''`, labelOverlap: true };
  }
  if (axis.ticks !== undefined) return { ...common, values: [...axis.ticks] };
  if (axis.scale !== 'log') return { ...common, tickCount: Math.max(2, Math.round(length / (side === 'x' ? 75 : 55))), labelOverlap: true };
  const { all, labelled } = logTicks(axis.window, length);
  const labels = Object.fromEntries(labelled.map((value) => [String(value), decadeText(value)]));
  const carries = `indexof([${labelled.join(', ')}], datum.value) >= 0`;
  return {
    ...common,
    values: [...all],
    labelExpr: `${JSON.stringify(labels)}[toString(datum.value)] || ''`,
    labelOverlap: false,
    tickSize: { condition: { test: carries, value: 6 }, value: 3 },
  };
}

/** Breaks a long title at a space or an operator, at most into two lines. */
function breakTitle(title: string, width: number): string | string[] {
  const style = { size: textSize.axisTitle };
  if (textWidth(title, style) <= width) return title;
  const breaks = [...title.matchAll(/ (?=\()| /g)].map(({ index }) => index);
  if (breaks.length === 0) return title;
  const widest = (at: number) => Math.max(textWidth(title.slice(0, at), style), textWidth(title.slice(at + 1), style));
  const best = breaks.reduce((chosen, at) => (widest(at) < widest(chosen) ? at : chosen));
  return [title.slice(0, best), title.slice(best + 1)];
}

/** Both position channels of a unit whose data hold `x` and `y`. */
export function positionChannels(frame: Frame): { x: VegaSpec; y: VegaSpec } {
  return {
    x: { field: 'x', type: 'quantitative', scale: scaleSpec(frame.x), axis: axisSpec(frame.x, frame.width, 'x') },
    y: { field: 'y', type: 'quantitative', scale: scaleSpec(frame.y), axis: axisSpec(frame.y, frame.height, 'y') },
  };
}
