import type { Box, Point } from './geometry';

/** One axis: its finished title (see `axisTitle`), its scale, and the window of data that is shown. */
export interface Axis {
  readonly title: string;
  readonly scale?: 'linear' | 'log';
  /** Data values at the two ends, low to high. */
  readonly window: readonly [number, number];
  /** Draws the axis with its high end left or at the bottom (default false). */
  readonly reversed?: boolean;
  /** Names along the axis instead of numbers: the first stands at 0, the next at 1 … */
  readonly names?: readonly string[];
  /** Exact places of the ticks, instead of round numbers. */
  readonly ticks?: readonly number[];
  /** Texts of the ticks, one each of `ticks`, instead of their numbers. */
  readonly tickNames?: readonly string[];
  /** `false` draws no axis at all. */
  readonly shown?: boolean;
  /** Faint lines across the diagram at each tick (default false). */
  readonly grid?: boolean;
}

/** The rectangle that a diagram is drawn in: size in pixels, and its two axes. */
export interface Frame {
  readonly width: number;
  readonly height: number;
  readonly x: Axis;
  readonly y: Axis;
}

/** Vega-Lite text, loosely typed: front ends read several versions of it. */
export type VegaSpec = { readonly [property: string]: unknown };

function pixel(axis: Axis, length: number, value: number, upward: boolean): number {
  const [low, high] = axis.window;
  const part = axis.scale === 'log' ? Math.log(value / low) / Math.log(high / low) : (value - low) / (high - low);
  return upward !== (axis.reversed === true) ? length * (1 - part) : length * part;
}

/** Place of a data point in the frame, in pixels from its top left corner. */
export function toPixels(frame: Frame, [x, y]: Point): Point {
  return [pixel(frame.x, frame.width, x, false), pixel(frame.y, frame.height, y, true)];
}

function unpixel(axis: Axis, length: number, at: number, upward: boolean): number {
  const [low, high] = axis.window;
  const part = upward !== (axis.reversed === true) ? 1 - at / length : at / length;
  return axis.scale === 'log' ? low * (high / low) ** part : low + part * (high - low);
}

/** The data point at a place in the frame: the way back from `toPixels`. */
export function fromPixels(frame: Frame, [x, y]: Point): Point {
  return [unpixel(frame.x, frame.width, x, false), unpixel(frame.y, frame.height, y, true)];
}

/** The frame's own rectangle in pixels. */
export function frameBox({ width, height }: Frame): Box {
  return { left: 0, right: width, top: 0, bottom: height };
}

/** Whether a point can be drawn at all: both values known, and positive where the axis is logarithmic. */
export function isDrawable({ x, y }: Frame, px: number, py: number): boolean {
  return Number.isFinite(px) && Number.isFinite(py) && (x.scale !== 'log' || px > 0) && (y.scale !== 'log' || py > 0);
}

export function inWindow({ x, y }: Frame, px: number, py: number): boolean {
  return px >= x.window[0] && px <= x.window[1] && py >= y.window[0] && py <= y.window[1];
}

/** What a user may ask of the window: the data and a margin (default), all that the diagram has, or exact limits. */
export type WindowChoice = 'data' | 'whole' | { readonly x?: readonly [number, number]; readonly y?: readonly [number, number] };

/** @throws RangeError for a window that is none of the choices, or limits that do not rise */
export function checkWindow(who: string, window: unknown): void {
  if (window === undefined || window === 'data' || window === 'whole') return;
  const limits = window as { x?: unknown; y?: unknown } | null;
  const fits = (pair: unknown) =>
    pair === undefined || (Array.isArray(pair) && pair.length === 2 && pair.every(Number.isFinite) && pair[0] < pair[1]);
  if (typeof limits !== 'object' || limits === null || !fits(limits.x) || !fits(limits.y)) {
    throw new RangeError(
      `${who}: window must be "data", "whole", or { x: [low, high], y: [low, high] } with rising numbers, not ${JSON.stringify(window)}.`,
    );
  }
}

const roundSteps = [1, 2, 2.5, 5, 10] as const;

/** A round step of which some `count` cover the span. */
export function roundStep(span: number, count: number): number {
  const rough = span / count;
  const power = 10 ** Math.floor(Math.log10(rough));
  return power * roundSteps.find((step) => step * power >= rough * 0.999)!;
}

/** What else is known of an axis when its window is chosen. */
export interface WindowHints {
  readonly scale?: 'linear' | 'log';
  /** Limits that the window never leaves (0 for a concentration). */
  readonly within?: readonly [number, number];
  /** The window when there is nothing to show, or 'whole' is asked for. */
  readonly whole?: readonly [number, number];
  /** The least span that is shown, so that one sample does not fill the frame; a factor on log axes. */
  readonly leastSpan?: number;
}

/**
 * The window of one axis around some values: their extent and a margin, widened to round numbers.
 *
 * @param values any arrays of numbers; those that are not finite (or not positive, on a log axis) do not count
 */
export function windowAround(values: Iterable<ArrayLike<number>>, hints: WindowHints = {}): readonly [number, number] {
  const { scale = 'linear', within = [-Infinity, Infinity], whole } = hints;
  let low = Infinity;
  let high = -Infinity;
  for (const array of values) {
    for (let i = 0; i < array.length; i++) {
      const value = array[i];
      if (!Number.isFinite(value) || (scale === 'log' && value <= 0)) continue;
      if (value < low) low = value;
      if (value > high) high = value;
    }
  }
  if (low > high) return whole ?? (scale === 'log' ? [1, 100] : [0, 1]);
  if (scale === 'log') return logWindow(low, high, hints);
  const size = Math.max(Math.abs(low), Math.abs(high));
  // Isotope ratios differ in the fifth digit; less than that is one value, which gets a fifth of itself. Next to nothing is nothing.
  const least = hints.leastSpan ?? (size < 1e-200 ? 1 : high - low > size * 1e-6 ? 0 : size * 0.2);
  const span = Math.max(high - low, least);
  const middle = (low + high) / 2;
  const step = roundStep(span * 1.12, 6) / 2;
  const from = Math.floor((middle - span * 0.56) / step) * step;
  const to = Math.ceil((middle + span * 0.56) / step) * step;
  // A quantity that is never negative gets no negative part of the axis.
  const floor = low >= 0 ? Math.max(0, within[0]) : within[0];
  const window = [tidy(Math.max(from, floor)), tidy(Math.min(to, within[1]))] as const;
  // Values that all lie beyond the limits leave nothing between them.
  return window[0] < window[1] ? window : (whole ?? [tidy(from), tidy(to)]);
}

/** Log windows end on a tick, and span half a decade at least. */
function logWindow(low: number, high: number, { within = [0, Infinity], leastSpan = 4, whole }: WindowHints): readonly [number, number] {
  const margin = 1.12;
  let from = low / margin;
  let to = high * margin;
  if (to / from < leastSpan) {
    const widen = Math.sqrt(leastSpan / (to / from));
    from /= widen;
    to *= widen;
  }
  const marks = [1, 1.5, 2, 3, 4, 5, 6, 8];
  const down = (value: number) => {
    const power = 10 ** Math.floor(Math.log10(value) + 1e-9);
    return power * marks.filter((mark) => mark * power <= value * 1.000001).at(-1)!;
  };
  const up = (value: number) => {
    const power = 10 ** Math.floor(Math.log10(value) + 1e-9);
    return (marks.find((mark) => mark * power >= value * 0.999999) ?? 10) * power;
  };
  const window = [tidy(Math.max(down(from), within[0] > 0 ? within[0] : 0)), tidy(Math.min(up(to), within[1]))] as const;
  return window[0] < window[1] ? window : (whole ?? [tidy(down(from)), tidy(up(to))]);
}

/** Takes off the noise of binary fractions. */
export function tidy(value: number): number {
  return Number(value.toPrecision(10));
}
