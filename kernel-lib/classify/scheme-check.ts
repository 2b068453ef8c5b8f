import { compileScheme } from './compile';
import { fieldAt, outlineArea } from './geometry';
import type { Scheme } from './scheme';

/** Points a side of the grid on which a scheme's fields are checked against each other. */
const gridSide = 61;

/** Fields must have an area, hold their own name, and not overlap. Gaps are allowed: they are places without a name. */
export function checkTiling(scheme: Scheme, fail: (why: string) => never): void {
  const drawn = scheme.fields.filter(({ vertices }) => vertices.length > 0);
  if (drawn.length === 0) return;
  for (const { symbol, vertices } of drawn) {
    if (!(Math.abs(outlineArea(vertices)) > 0)) fail(`the field "${symbol}" has no area.`);
    const { x, y } = scheme.frame;
    const outside = vertices.find(([vx, vy]) => vx < x[0] - 1e-9 || vx > x[1] + 1e-9 || vy < y[0] - 1e-9 || vy > y[1] + 1e-9);
    if (outside !== undefined) fail(`the field "${symbol}" has a vertex ${JSON.stringify(outside)} outside the frame.`);
  }
  const { flat, toPlane, single } = compileScheme(scheme);
  const lone = drawn.map((_, k) => single(k));
  const [xa, xb] = scheme.frame.x;
  const [ya, yb] = scheme.frame.y;
  const at = (low: number, high: number, i: number, log: boolean) => {
    const part = (i + 0.3819) / gridSide;
    return log ? low * (high / low) ** part : low + (high - low) * part;
  };
  for (let i = 0; i < gridSide; i++) {
    for (let j = 0; j < gridSide; j++) {
      const [x, y] = toPlane(at(xa, xb, i, scheme.axes[0].scale === 'log'), at(ya, yb, j, scheme.axes[1].scale === 'log'));
      const first = fieldAt(flat, x, y);
      if (first < 0) continue;
      const second = lone.findIndex((field, k) => k > first && fieldAt(field, x, y) === 0);
      if (second >= 0) fail(`the fields "${drawn[first].symbol}" and "${drawn[second].symbol}" overlap.`);
    }
  }
}
