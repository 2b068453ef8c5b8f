import { specNumber, unit, type Layer } from '../layer';
import type { VegaSpec } from '../frame';
import { groupColours, ink } from '../theme';

/** One bar: it stands at a place 0, 1, 2 … of an axis with `names` (see `Axis`), and runs from a base to its value. */
export interface BarShape {
  readonly place: number;
  readonly value: number;
  /** Where the bar starts (default 0). */
  readonly base?: number;
  /** Ends of an error whisker. */
  readonly low?: number;
  readonly high?: number;
  readonly colour?: string;
  /** What hovering says besides the value. */
  readonly name?: string;
}

export interface BarsOptions {
  /** `up`: places along x, values along y (default); `across`: places along y, values along x. */
  readonly direction?: 'up' | 'across';
  /** Width of a bar in places (default 0.7). */
  readonly width?: number;
  readonly valueTitle?: string;
}

/** Bars with whiskers: shares, residuals, probabilities. */
export function barsLayer(bars: readonly BarShape[], { direction = 'up', width = 0.7, valueTitle = 'value' }: BarsOptions = {}): Layer {
  const turn = (place: number, place2: number, value: number, value2: number) => {
    const [p, p2, v, v2] = [place, place2, value, value2].map(specNumber);
    return direction === 'up' ? { x: p, x2: p2, y: v, y2: v2 } : { y: p, y2: p2, x: v, x2: v2 };
  };
  const ends = { x2: { field: 'x2' }, y2: { field: 'y2' } };
  return {
    draw({ frame }) {
      const known = bars.filter(({ value }) => Number.isFinite(value));
      const rows = known.map(({ place, value, base = 0, colour = groupColours[0], name = '' }) => ({
        ...turn(place - width / 2, place + width / 2, base, value),
        v: specNumber(value),
        c: colour,
        n: name,
      }));
      const whiskers = known
        .filter(({ low, high }) => low !== undefined && high !== undefined)
        .map(({ place, low, high }) => turn(place, place, low!, high!));
      const tooltip = [
        ...(known.some(({ name }) => name !== undefined) ? [{ field: 'n', type: 'nominal', title: 'name' }] : []),
        { field: 'v', type: 'quantitative', title: valueTitle, format: '.3~g' },
      ];
      const units: VegaSpec[] = [
        unit(frame, { type: 'rect', opacity: 0.9 }, rows, { ...ends, fill: { field: 'c', type: 'nominal', scale: null }, tooltip }),
      ];
      if (whiskers.length > 0) units.push(unit(frame, { type: 'rule', color: ink.text, strokeWidth: 1, tooltip: null }, whiskers, ends));
      return units;
    },
  };
}
