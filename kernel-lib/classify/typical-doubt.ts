import type { Suite } from '../suite';
import { isVolatileFree, type IronBasis } from './axes';
import { compileScheme } from './compile';
import { fieldMasses } from './gaussian';
import { axisSpreads, boundMasses, uncertainSymbols, type Uncertainty } from './probability';
import { rawAnalysis } from './raw-analysis';
import type { Scheme } from './scheme';

/**
 * How likely another field is than the one a point lies in, for a sample with the errors that are usual in the suite (the median of each
 * variance): 0 far from every boundary, 0.5 on one. What a diagram shades.
 *
 * @param suite n samples with 1σ, or with `uncertainty` given
 * @param scheme a scheme with fields
 * @param at x and y of m points, in axis units (per cent of the first two corners for a triangle)
 * @param options `iron`, `uncertainty` as for `classify`
 * @returns m numbers, NaN outside all fields; undefined where no 1σ is known or the scheme has no fields
 * @example typicalDoubt(suite, findScheme('tas'), { x: [57], y: [4] })
 */
export function typicalDoubt(
  suite: Suite,
  scheme: Scheme,
  at: { readonly x: ArrayLike<number>; readonly y: ArrayLike<number> },
  options: { readonly iron?: IronBasis; readonly uncertainty?: Uncertainty } = {},
): Float64Array | undefined {
  const { iron = 'measured', uncertainty = {} } = options;
  if (scheme.kind === 'criteria' || scheme.kind === 'points') return undefined;
  const raw = rawAnalysis(suite, uncertainty);
  const uncertain = uncertainSymbols(raw, [scheme]);
  if (uncertain.length === 0) return undefined;
  const [spread] = axisSpreads(raw, isVolatileFree(suite) ? (suite.has('Fe2O3T') ? 'total-as-Fe2O3' : 'measured') : iron, [scheme], uncertain);
  if (spread === undefined) return undefined;
  const [xx, xy, yy] = [spread.xx, spread.xy, spread.yy].map(median);
  const { flat, toPlane } = compileScheme(scheme);
  const masses = new Float64Array(scheme.fields.length);
  const doubt = new Float64Array(at.x.length);
  for (let i = 0; i < doubt.length; i++) {
    const [x, y] = toPlane(at.x[i], at.y[i]);
    if (scheme.kind === 'thresholds') boundMasses(scheme, y, Math.sqrt(yy), masses);
    else fieldMasses(flat, x, y, xx, xy, yy, masses);
    let sum = 0;
    let most = 0;
    for (const mass of masses) {
      sum += mass;
      if (mass > most) most = mass;
    }
    doubt[i] = sum > 0.5 ? Math.max(0, 1 - most / sum) : NaN;
  }
  return doubt;
}

function median(values: Float64Array): number {
  const known = values.filter(Number.isFinite).sort();
  return known.length === 0 ? NaN : known[Math.floor(known.length / 2)];
}
