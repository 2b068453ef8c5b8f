import type { StepDetail, Suite } from '../suite';
import { isVolatileFree, operandsOf, type IronBasis } from './axes';
import { compileScheme } from './compile';
import { farAway, fieldMasses, normalBelow } from './gaussian';
import { schemeNeeds } from './needs';
import { bareSuite, planeColumns } from './plane-columns';
import { rawAnalysis, sumOxides } from './raw-analysis';
import { sampledProbabilities } from './probability-sampled';
import type { Scheme } from './scheme';
import type { SchemeVerdict } from './verdicts';

/** How probabilities are found. */
export type ProbabilityMethod = 'analytic' | 'sampled';

/** 1σ by analyte: a fraction of the value, or a value in the column's unit (both: added in squares). */
export type Uncertainty = Readonly<Record<string, { readonly relative?: number; readonly absolute?: number }>>;

/** Probability of each field of a scheme for every sample. */
export interface FieldProbabilities {
  readonly method: ProbabilityMethod;
  /** One array (n) a field, in the order of `scheme.fields`: 0 to 1; NaN where no 1σ is known or the sample has no place. */
  readonly values: readonly Float64Array[];
  /** Probability that the sample lies in no field (n). */
  readonly none: Float64Array;
}

/** @internal Settings that `probabilities` needs. */
export interface ProbabilitySettings {
  readonly iron: IronBasis;
  readonly probability?: ProbabilityMethod | 'none';
  readonly uncertainty: Uncertainty;
  readonly draws: number;
  readonly seed: number;
}

interface Chances {
  readonly byScheme: ReadonlyMap<string, FieldProbabilities>;
  readonly detail: { readonly [name: string]: StepDetail };
}

/** Step of the central difference, in σ. */
const differenceStep = 1e-3;

/**
 * Probabilities of the fields of several schemes, from the 1σ of the analysis. Analyses are compositions: the error of each oxide is moved
 * through the recasting to 100 %, so errors of the axes are correlated as they must be.
 */
export function probabilities(suite: Suite, verdicts: readonly SchemeVerdict[], settings: ProbabilitySettings): Chances {
  if (settings.probability === 'none') return { byScheme: new Map(), detail: { probability: 'none' } };
  const wanted = verdicts.filter(({ scheme: { kind } }) => kind !== 'points');
  const raw = rawAnalysis(suite, settings.uncertainty);
  const uncertain = uncertainSymbols(
    raw,
    wanted.map(({ scheme }) => scheme),
  );
  if (uncertain.length === 0) return { byScheme: new Map(), detail: { probability: 'none: no 1σ known' } };
  const method = settings.probability ?? 'analytic';
  const unknown = [...new Set(wanted.flatMap(({ scheme }) => touched(scheme)))].filter((symbol) => raw.has(symbol) && !uncertain.includes(symbol));
  const detail = {
    probability: method,
    uncertain,
    ...(unknown.length === 0 ? {} : { takenAsExact: unknown }),
    ...(method === 'sampled' ? { draws: settings.draws, seed: settings.seed } : {}),
  };
  // A suite that was recast keeps its own way with iron: its iron columns say which.
  const iron = isVolatileFree(suite) ? (suite.has('Fe2O3T') ? 'total-as-Fe2O3' : 'measured') : settings.iron;
  const byScheme = method === 'analytic' ? analytic(raw, iron, wanted, uncertain) : sampledProbabilities(raw, iron, wanted, uncertain, settings);
  return { byScheme, detail };
}

/** Columns whose errors reach a scheme: what its axes read, and every oxide of the sum on a volatile-free basis. */
function touched(scheme: Scheme): readonly string[] {
  const needs = schemeNeeds(scheme).flatMap((symbol) => (symbol === 'Mg-number' ? ['MgO', 'FeOT'] : [symbol]));
  const iron = needs.some((symbol) => symbol === 'FeOT') ? ['FeOT', 'Fe2O3T', 'FeO', 'Fe2O3'] : [];
  return [
    ...new Set([
      ...needs,
      ...iron,
      ...(scheme.basis === 'volatile-free' || scheme.criteria.some(({ basis }) => basis === 'volatile-free') ? sumOxides : []),
    ]),
  ];
}

/** Columns with a 1σ that reaches one of the schemes. */
export function uncertainSymbols(raw: Suite, schemes: readonly Scheme[]): readonly string[] {
  const wanted = new Set(schemes.flatMap(touched));
  return [...raw.columns.values()]
    .filter(({ symbol, sigma }) => wanted.has(symbol) && sigma !== undefined && sigma.some((each) => each > 0))
    .map(({ symbol }) => symbol);
}

interface Spread {
  readonly scheme: Scheme;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly xx: Float64Array;
  readonly xy: Float64Array;
  readonly yy: Float64Array;
}

/** Variances and covariance of every scheme's axes, to first order, each uncertain column moved by itself. */
export function axisSpreads(raw: Suite, iron: IronBasis, schemes: readonly Scheme[], uncertain: readonly string[]): readonly Spread[] {
  const { size } = raw;
  const place = operandsOf(bareSuite(raw, new Map()), iron);
  const spreads: Spread[] = [];
  for (const scheme of schemes) {
    const at = planeColumns(place, scheme);
    if (at !== undefined) spreads.push({ scheme, ...at, xx: new Float64Array(size), xy: new Float64Array(size), yy: new Float64Array(size) });
  }
  for (const symbol of uncertain) {
    const { values, sigma } = raw.column(symbol);
    const moved = [differenceStep, -differenceStep].map((by) => {
      const shifted = values.map((value, i) => value + (sigma![i] > 0 ? by * sigma![i] : 0));
      return operandsOf(bareSuite(raw, new Map([[symbol, shifted]])), iron);
    });
    for (const { scheme, xx, xy, yy } of spreads) {
      if (!touched(scheme).includes(symbol)) continue;
      const [up, down] = moved.map((operands) => planeColumns(operands, scheme)!);
      for (let i = 0; i < size; i++) {
        const dx = (up.x[i] - down.x[i]) / (2 * differenceStep);
        const dy = (up.y[i] - down.y[i]) / (2 * differenceStep);
        xx[i] += dx * dx;
        xy[i] += dx * dy;
        yy[i] += dy * dy;
      }
    }
  }
  return spreads;
}

function analytic(
  raw: Suite,
  iron: IronBasis,
  verdicts: readonly SchemeVerdict[],
  uncertain: readonly string[],
): ReadonlyMap<string, FieldProbabilities> {
  const found = new Map<string, FieldProbabilities>();
  const schemes = verdicts.map(({ scheme }) => scheme).filter(({ kind }) => kind !== 'criteria');
  for (const spread of axisSpreads(raw, iron, schemes, uncertain)) {
    const { scheme, x, y, xx, xy, yy } = spread;
    const values = scheme.fields.map(() => new Float64Array(raw.size));
    const none = new Float64Array(raw.size);
    const masses = new Float64Array(scheme.fields.length);
    const { flat } = compileScheme(scheme);
    for (let i = 0; i < raw.size; i++) {
      if (scheme.kind === 'thresholds') boundMasses(scheme, y[i], Math.sqrt(yy[i]), masses);
      else fieldMasses(flat, x[i], y[i], xx[i], xy[i], yy[i], masses);
      let sum = 0;
      for (let k = 0; k < masses.length; k++) {
        values[k][i] = masses[k];
        sum += masses[k];
      }
      none[i] = Math.max(0, 1 - sum);
    }
    found.set(scheme.key, { method: 'analytic', values, none });
  }
  return found;
}

/** Masses of a normal between the bounds of a one-axis scheme. */
export function boundMasses({ bounds, axes }: Scheme, value: number, sigma: number, out: Float64Array): void {
  if (!(sigma > 0) || !Number.isFinite(value)) {
    out.fill(NaN);
    return;
  }
  let below = 0;
  for (let k = 0; k <= bounds.length; k++) {
    const bound = k === bounds.length ? Infinity : axes[1].scale === 'log' ? Math.log10(bounds[k]) : bounds[k];
    const to = bound === Infinity ? 1 : normalBelow(Math.max(-farAway * 2, Math.min(farAway * 2, (bound - value) / sigma)));
    out[k] = to - below;
    below = to;
  }
}
