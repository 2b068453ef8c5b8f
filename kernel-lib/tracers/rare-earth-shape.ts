import { rareEarths } from '../chemistry';
import { showAs, type Showable, type TableCell, type TableView } from '../display';
import { derivedColumn, resolveColumn, step, type Column, type Step, type Suite } from '../suite';
import { checkCall } from './check-call';
import { ionicRadius } from './ionic-radii';
import { referenceComposition, usualReferences, type ReferenceComposition } from './reference';
import { SmallSystem } from './small-system';

/** How shapes of rare-earth patterns are fitted. */
export interface ShapeOptions {
  /** Highest term: 1 slope, 2 curvature, 3 (default) the S-shape of garnet and of middle rare earths. */
  readonly degree?: 1 | 2 | 3;
  /** What to divide by (default `chondrite-c1-1989`). */
  readonly reference?: ReferenceComposition;
  /** Elements that do not take part (default Eu, whose valence differs); they still get a residual. */
  readonly exclude?: readonly string[];
  /** Least relative 1σ of a concentration (default 0.03). */
  readonly error?: number;
  /** An element is outlying when its studentised residual is beyond this (default 3). */
  readonly outlyingBeyond?: number;
}

/** Shapes of rare-earth patterns: level, slope, curvature and S-shape of each sample. */
export interface RareEarthShapes extends Showable {
  readonly samples: readonly string[];
  readonly degree: number;
  /**
   * `lambda-0` (mean of ln normalised), `lambda-1` (slope, per Å; positive: light rare earths enriched), `lambda-2`, `lambda-3`, and `misfit`
   * (χ²/ν; about 1 where the curve fits within the errors). n values each, with 1σ.
   */
  readonly columns: ReadonlyMap<string, Column>;
  /** By rare earth: ln(observed/fitted), n values; that of an excluded element is its anomaly against the smooth curve. */
  readonly residuals: ReadonlyMap<string, Float64Array>;
  /** Outlying elements of each sample. */
  readonly outlying: readonly (readonly string[])[];
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/** The elements over which the polynomials are orthogonal, whatever a sample has: so that the terms compare between samples. */
const orthogonalOver = rareEarths.filter((element) => element !== 'Eu');

/**
 * Polynomials in ionic radius, orthogonal over the rare earths without Eu, by Gram and Schmidt: value of term k at each rare earth.
 *
 * @returns [term][rare earth], term 0 being 1
 */
export function rareEarthPolynomials(): readonly Float64Array[] {
  const radii = rareEarths.map(ionicRadius);
  const over = orthogonalOver.map((element) => (rareEarths as readonly string[]).indexOf(element));
  const terms: Float64Array[] = [];
  for (let k = 0; k <= 3; k++) {
    // Powers about the middle keep the orthogonalisation well conditioned; the result is the same.
    const term = Float64Array.from(radii, (radius) => (radius - 1.05) ** k);
    for (const lower of terms) {
      let product = 0;
      let norm = 0;
      for (const i of over) {
        product += term[i] * lower[i];
        norm += lower[i] * lower[i];
      }
      for (let i = 0; i < term.length; i++) term[i] -= (product / norm) * lower[i];
    }
    terms.push(term);
  }
  return terms;
}

/**
 * The shape of each rare-earth pattern as a sum of orthogonal polynomials in ionic radius: level, slope, curvature, S-shape.
 *
 * ln(C/reference) = λ0 + λ1·f1(r) + λ2·f2(r) + λ3·f3(r), fitted by weighted least squares to whatever elements a sample has (at least two more
 * than terms). A smooth pattern fits within its errors; an element off the curve is named.
 *
 * @param suite n samples with rare earths in ppm
 * @param options `degree`, `reference`, `exclude`, `error`, `outlyingBeyond`
 * @returns λs with 1σ (λ1 per Å, λ2 per Å², λ3 per Å³), misfit χ²/ν, residuals (ln) by element, outlying elements by sample
 * @throws RangeError for bad options or a reference without a rare earth of the suite
 * @source O'Neill 2016 (from memory); radii of Shannon 1976
 * @example rareEarthShapes(suite).columns.get('lambda-1').values
 */
export function rareEarthShapes(suite: Suite, options: ShapeOptions = {}): RareEarthShapes {
  checkCall('rareEarthShapes', suite, options);
  const { degree = 3, exclude = ['Eu'], error = 0.03, outlyingBeyond = 3 } = options;
  if (degree !== 1 && degree !== 2 && degree !== 3) throw new RangeError(`rareEarthShapes: degree must be 1, 2 or 3, not ${String(degree)}.`);
  if (!(error > 0 && error < 1)) throw new RangeError(`rareEarthShapes: error is ${String(error)}; give a relative 1σ above 0 and below 1.`);
  if (!(outlyingBeyond > 0)) throw new RangeError(`rareEarthShapes: outlyingBeyond is ${String(outlyingBeyond)}; give a positive number of σ.`);
  for (const element of exclude)
    if (!(rareEarths as readonly string[]).includes(element)) throw new RangeError(`rareEarthShapes: "${element}" in exclude is not a rare earth.`);
  const reference = referenceComposition(options.reference ?? usualReferences.rareEarths);
  const size = suite.size;
  const terms = degree + 1;
  const basis = rareEarthPolynomials();
  const rows = rareEarths.map((_, e) => Float64Array.from({ length: terms }, (_each, k) => basis[k][e]));
  const present = rareEarths
    .map((element, e) => ({ element, e, column: resolveColumn(suite, element), fitted: !exclude.includes(element) }))
    .filter(({ column }) => column !== undefined);
  const divisors = present.map(({ element }) => {
    const value = reference.valueOf(element);
    if (value === undefined) throw new RangeError(`rareEarthShapes: ${reference.name} has no ${element}; choose another reference.`);
    return value;
  });
  const blank = () => new Float64Array(size).fill(NaN);
  const lambdas = Array.from({ length: terms }, blank);
  const sigmas = Array.from({ length: terms }, blank);
  const misfit = blank();
  const residuals = present.map(blank);
  const outlying: string[][] = Array.from({ length: size }, () => []);
  const count = present.length;
  const y = new Float64Array(count);
  const w = new Float64Array(count);
  let tooFew = 0;
  const system = new SmallSystem(terms);
  for (let i = 0; i < size; i++) {
    let fitted = 0;
    system.clear();
    for (let p = 0; p < count; p++) {
      const { column, e } = present[p];
      const value = column!.values[i];
      y[p] = value > 0 ? Math.log(value / divisors[p]) : NaN;
      const own = (column!.sigma?.[i] ?? NaN) / value;
      w[p] = 1 / (own > error ? own : error) ** 2;
      if (Number.isNaN(y[p]) || !present[p].fitted) continue;
      fitted++;
      system.add(rows[e], y[p], w[p]);
    }
    const freedom = fitted - terms;
    if (freedom < 1 || !system.solve()) {
      tooFew++;
      continue;
    }
    let chiSquare = 0;
    for (let p = 0; p < count; p++) {
      if (Number.isNaN(y[p])) continue;
      const { e, element, fitted: takesPart } = present[p];
      const residual = y[p] - dot(system.solution, rows[e]);
      residuals[p][i] = residual;
      if (!takesPart) continue;
      chiSquare += residual * residual * w[p];
      const leverage = w[p] * system.quadratic(rows[e]);
      if (Math.abs(residual) * Math.sqrt(w[p]) > outlyingBeyond * Math.sqrt(Math.max(1e-9, 1 - leverage))) outlying[i].push(element);
    }
    misfit[i] = chiSquare / freedom;
    for (let k = 0; k < terms; k++) {
      lambdas[k][i] = system.solution[k];
      sigmas[k][i] = Math.sqrt(system.variance(k));
    }
  }
  const columns = new Map(
    lambdas.map((values, k) => [`lambda-${k}`, derivedColumn(`lambda-${k}`, values, k === 0 ? '' : k === 1 ? '1/Å' : `1/Å^${k}`, sigmas[k])]),
  );
  columns.set('misfit', derivedColumn('misfit', misfit, ''));
  const notes = [
    `Divided by ${reference.name}; ${exclude.length > 0 ? `without ${exclude.join(', ')}` : 'all rare earths'}; least relative 1σ ${error}.`,
    ...(tooFew > 0 ? [`${tooFew} samples not fitted: fewer than ${terms + 1} usable rare earths.`] : []),
  ];
  const because = step(
    'rareEarthShapes',
    { degree, reference: reference.key, exclude: [...exclude], error, outlyingBeyond, notFitted: tooFew },
    {
      sources: ['oneill_2016', 'shannon_1976', ...reference.sources],
      tables: ['ionic-radii.csv', ...reference.tables],
      fromMemory: [
        ...reference.fromMemory(present.map(({ element }) => element)),
        'radii of trivalent rare earths in eightfold coordination (Shannon 1976)',
      ],
      says: `Rare-earth patterns are described by polynomials of ionic radius up to degree ${degree}, orthogonal over the rare earths without Eu.`,
    },
  );
  const result = {
    samples: suite.samples,
    degree,
    columns,
    residuals: new Map(present.map(({ element }, p) => [element as string, residuals[p]])),
    outlying,
    notes,
    lineage: [...suite.lineage, because],
  };
  return showAs(result, shapesView);
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < a.length; k++) sum += a[k] * b[k];
  return sum;
}

function shapesView(result: Omit<RareEarthShapes, keyof Showable>): TableView {
  const columns = [...result.columns];
  const shown = Math.min(result.samples.length, 60);
  const rows = Array.from({ length: shown }, (_, i): TableCell[] => [
    result.samples[i],
    ...columns.map(([, { values, sigma }]) =>
      Number.isNaN(values[i])
        ? null
        : sigma === undefined
          ? Number(values[i].toPrecision(3))
          : `${Number(values[i].toPrecision(4))} ± ${Number(sigma[i].toPrecision(2))}`,
    ),
    result.outlying[i].join(', '),
  ]);
  return {
    title: 'Shapes of rare-earth patterns',
    columns: ['sample', ...columns.map(([name]) => name), 'outlying'],
    rows,
    totalRows: result.samples.length,
    notes: result.notes,
  };
}
