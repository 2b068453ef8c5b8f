import type { Frame, VegaSpec } from './frame';
import type { Point } from './geometry';
import { lineUnit, type Layer } from './layer';
import { fontStack, ink, textSize } from './theme';

/** Vega-Lite has no triangles: the corners stand at (0, 0), (100, 0) and (50, 86.6) of a plain frame, and everything is computed. */
const height = 50 * Math.sqrt(3);

/**
 * Place of a composition in the triangle: first corner at the left, second at the top, third at the right.
 *
 * @param first per cent of the first corner
 * @param second per cent of the second corner
 */
export function ternaryPoint(first: number, second: number): Point {
  return [100 - first - second / 2, (second * height) / 100];
}

/** The way back from `ternaryPoint`: per cent of the first and the second corner. */
export function ternaryShares(x: number, y: number): Point {
  const second = (100 * y) / height;
  return [100 - x - second / 2, second];
}

/** The frame of a triangle `side` pixels wide. */
export function ternaryFrame(side = 440): Frame {
  const hidden = { title: '', shown: false } as const;
  return { width: side, height: Math.round((side * height) / 100), x: { ...hidden, window: [0, 100] }, y: { ...hidden, window: [0, height] } };
}

/** What the corners are: a letter or short name, and what it stands for. */
export interface TernaryCorner {
  readonly name: string;
  readonly meaning?: string;
}

/** Outline, faint lines and ticks each 20 %, per cents along the three sides, and the names of the corners. */
export function ternaryLayer([first, second, third]: readonly [TernaryCorner, TernaryCorner, TernaryCorner]): Layer {
  const shares = [20, 40, 60, 80];
  const grid = shares.flatMap((share): Point[][] => [
    [ternaryPoint(share, 0), ternaryPoint(share, 100 - share)],
    [ternaryPoint(0, share), ternaryPoint(100 - share, share)],
    [ternaryPoint(0, 100 - share), ternaryPoint(100 - share, 0)],
  ]);
  const triangle = [ternaryPoint(100, 0), ternaryPoint(0, 100), ternaryPoint(0, 0), ternaryPoint(100, 0)];
  // Each side counts the corner at its upper (or right) end, as its ticks run on into the lines of that share.
  const ticks = shares.flatMap((share) => [
    { from: ternaryPoint(100 - share, share), towards: [-1, 0] as const, share, align: 'right', dx: -9, dy: 0 },
    { from: ternaryPoint(0, 100 - share), towards: [0.5, 0.866] as const, share, align: 'left', dx: 6, dy: -7 },
    { from: ternaryPoint(share, 0), towards: [0.5, -0.866] as const, share, align: 'center', dx: 6, dy: 13 },
  ]);
  return {
    draw({ frame }) {
      const length = (5 / frame.width) * 100;
      const marks = ticks.map(({ from: [x, y], towards: [dx, dy] }): Point[] => [
        [x, y],
        [x + dx * length, y + dy * length],
      ]);
      const text = (rows: readonly object[], style: VegaSpec): VegaSpec => ({
        data: { values: rows },
        mark: { type: 'text', clip: false, font: fontStack, color: ink.text, baseline: 'middle', tooltip: null, ...style },
        encoding: {
          x: { field: 'x', type: 'quantitative', scale: { domain: [...frame.x.window], nice: false, zero: false }, axis: null },
          y: { field: 'y', type: 'quantitative', scale: { domain: [...frame.y.window], nice: false, zero: false }, axis: null },
          text: { field: 't', type: 'nominal' },
        },
      });
      const corner = ({ name, meaning }: TernaryCorner, [x, y]: Point, style: VegaSpec): VegaSpec[] => [
        text([{ x, y, t: name }], { fontSize: textSize.axisTitle + 1, fontWeight: 600, ...style }),
        ...(meaning === undefined
          ? []
          : [text([{ x, y, t: meaning }], { fontSize: textSize.note, ...style, dy: ((style['dy'] as number | undefined) ?? 0) + 15 })]),
      ];
      return [
        lineUnit(frame, grid, { color: ink.faintLine, strokeWidth: 0.5 }),
        lineUnit(frame, [triangle], { color: ink.axis, strokeWidth: 1.3, strokeJoin: 'miter', clip: false }),
        lineUnit(frame, marks, { color: ink.axis, strokeWidth: 1, clip: false }),
        ...ticks.map(({ from: [x, y], share, align, dx, dy }) =>
          text([{ x, y, t: String(share) }], { fontSize: textSize.note, align, dx, dy, color: ink.caption }),
        ),
        ...corner(first, ternaryPoint(100, 0), { align: 'center', dx: -10, dy: 32 }),
        ...corner(second, ternaryPoint(0, 100), { align: 'center', dx: 0, dy: second.meaning === undefined ? -14 : -30 }),
        ...corner(third, ternaryPoint(0, 0), { align: 'center', dx: 10, dy: 32 }),
      ];
    },
  };
}
