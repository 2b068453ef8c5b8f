import { jStat } from 'jstat';
import { showAs, type Showable } from '../display';
import { derivedColumn, step, suiteOf, Suite, type Traced } from '../suite';
import { estimateScatter, gatherDescent, excludingElement, fitRivals, type DescentInput, type FittedProcess } from './descent-fit';
import type { DescentProcess } from './descent-laws';
import { descentFindings, descentView, evidenceNeeded, mostUnexplained } from './descent-view';
import { joinLineage, oneAnalysis, type Composition } from './one-analysis';
import { readNumber } from './trace-setup';

/** What `fitDescent` takes. */
export interface FitDescentOptions {
  /** Elements to use (default: every element in ppm with a usable value in four samples of five). */
  readonly analytes?: readonly string[];
  /** Isotope ratios to use (default: those of the elements used, where half of the samples have one). */
  readonly isotopes?: readonly string[];
  /** The element taken as the most incompatible (default: the one that rises fastest), and its D (default 0). */
  readonly incompatible?: string;
  readonly incompatibleD?: number;
  /** Name of the sample at which F = 1 (default: the least evolved of those in line). */
  readonly parent?: string;
  /** A rock that may have been assimilated: one analysis with all elements and ratios used. */
  readonly assimilant?: Composition;
  /** Relative 1σ of elements without one of their own (default 0.05). */
  readonly relativeError?: number;
  /**
   * Relative scatter of the lavas themselves around one line, added in quadrature (default 0.03); `estimate` takes it from the data, so that the better of
   * crystallisation and mixing leaves half of the samples above their expected misfit. Real suites often scatter by 10 % and more.
   */
  readonly scatter?: number | 'estimate';
  /** Relative 1σ of isotope ratios, at least (default 0.00003 for Sr, Nd and Hf, 0.001 for Pb and Os). */
  readonly ratioError?: number;
  /** Probability of flagging any sample at all when every one is in line (default 0.01). */
  readonly level?: number;
}

/** One element along the line of descent. */
export interface DescentElement {
  readonly element: string;
  /** Slope against the most incompatible element in log–log space, (1 − D)/(1 − D of that element), and its 1σ. */
  readonly slope: number;
  readonly slopeSigma: number;
  /** Bulk coefficient that the slope means, and its 1σ. */
  readonly D: number;
  readonly DSigma: number;
  /** Concentration in the parent, ppm, and its relative 1σ. */
  readonly parent: number;
  readonly parentSigma: number;
}

/** One sample against the line of descent. */
export interface DescentSample {
  readonly sample: string;
  /** Liquid left, relative to the parent. */
  readonly F: number;
  readonly FSigma: number;
  readonly chiSquare: number;
  readonly degreesOfFreedom: number;
  readonly probability: number;
  readonly belongs: boolean;
  /** The element (or ratio) whose absence would mend the misfit most, and by how many σ it is off; '' where the sample belongs. */
  readonly excludedBy: string;
  readonly off: number;
}

/** One process tried on the same data. */
export interface DescentRival {
  readonly process: DescentProcess;
  /** Σ of the samples' misfits, each capped where the sample counts as not explained. */
  readonly misfit: number;
  readonly parameters: number;
  readonly bic: number;
  /** BIC less that of the best. */
  readonly difference: number;
  readonly unexplained: readonly string[];
}

/** A straight-line test: mixing makes a ratio linear in the inverse of its denominator; crystallisation bends it. */
export interface CompanionTest {
  readonly y: string;
  readonly x: string;
  readonly correlation: number;
  /** The quadratic term over its 1σ: beyond ±3 the companion plot is not straight, and mixing of two is not the whole story. */
  readonly bend: number;
}

/** A suite tested as one liquid line of descent. */
export interface DescentFit extends Traced, Showable {
  readonly elements: readonly DescentElement[];
  readonly samples: readonly DescentSample[];
  /** Parent of the line: one row, ppm with 1σ. */
  readonly parent: Suite;
  readonly incompatible: string;
  readonly rivals: readonly DescentRival[];
  /** `none of these` where even the best leaves more than half of the samples unexplained. */
  readonly preferred: DescentProcess | 'not distinguished' | 'none of these';
  /** The relative scatter of the lavas that was taken, or estimated. */
  readonly scatter: number;
  /** Assimilated/crystallised of the best assimilation fit; NaN where none was made. */
  readonly r: number;
  readonly companion: CompanionTest;
  /** The findings in words. */
  readonly why: string;
  readonly notes: readonly string[];
}

/** Slopes, F and parent from the crystallisation fit. */
function describeLine(input: DescentInput, fit: FittedProcess, options: FitDescentOptions, who: string) {
  const { problem } = fit.model;
  const [E, J] = [input.elements.length, problem.observables];
  const { parameters, hidden } = problem;
  const spread = new Float64Array(E);
  const centre = new Float64Array(E);
  const weights = new Float64Array(E);
  for (let e = 0; e < E; e++) {
    let [w, wt, wtt] = [0, 0, 0];
    for (let s = 0; s < input.samples; s++) {
      if (fit.counted[s] === 0 || Number.isNaN(input.values[s * J + e])) continue;
      const weight = 1 / input.sigma[s * J + e] ** 2;
      [w, wt, wtt] = [w + weight, wt + weight * hidden[s], wtt + weight * hidden[s] ** 2];
    }
    [weights[e], centre[e], spread[e]] = [w, wt / w, wtt - wt ** 2 / w];
  }
  const slopeOf = (e: number) => parameters[2 * e + 1];
  const upward = input.elements.reduce((sum, _, e) => sum + Math.sign(slopeOf(e)), 0) >= 0 ? 1 : -1;
  let reference = options.incompatible === undefined ? -1 : input.elements.indexOf(options.incompatible);
  if (options.incompatible !== undefined && reference < 0)
    throw new RangeError(`${who}: incompatible is "${options.incompatible}", which is not among the elements used (${input.elements.join(', ')}).`);
  if (reference < 0) reference = input.elements.reduce((best, _, e) => (upward * slopeOf(e) > upward * slopeOf(best) ? e : best), 0);
  const fastest = slopeOf(reference);
  const D0 = readNumber(options.incompatibleD ?? 0, who, 'incompatibleD', { from: 0, to: 1, open: 'to' });
  // −ln F = (t − t of the parent)·fastest/(1 − D0)
  const perT = fastest / (1 - D0);
  const inLine = input.names.map((_, s) => s).filter((s) => fit.counted[s] === 1);
  let parentAt =
    options.parent === undefined
      ? inLine.reduce((best, s) => (hidden[s] * perT < hidden[best] * perT ? s : best), inLine[0])
      : input.names.indexOf(options.parent);
  if (parentAt < 0) throw new RangeError(`${who}: parent is "${options.parent}", which is not among the samples used.`);
  const start = hidden[parentAt];
  const elements = input.elements.map((element, e): DescentElement => {
    const slope = slopeOf(e) / fastest;
    const own = 1 / Math.sqrt(spread[e]);
    const slopeSigma = e === reference ? 0 : Math.hypot(own / Math.abs(fastest), slope / Math.abs(fastest) / Math.sqrt(spread[reference]));
    const parent = Math.exp(parameters[2 * e] + slopeOf(e) * start);
    return {
      element,
      slope,
      slopeSigma,
      D: 1 - (1 - D0) * slope,
      DSigma: (1 - D0) * slopeSigma,
      parent,
      parentSigma: Math.sqrt(1 / weights[e] + (start - centre[e]) ** 2 / spread[e]),
    };
  });
  const samples = input.names.map((sample, s): DescentSample => {
    let curvature = 0;
    for (let e = 0; e < E; e++) if (!Number.isNaN(input.values[s * J + e])) curvature += (slopeOf(e) / input.sigma[s * J + e]) ** 2;
    const F = Math.exp(-(hidden[s] - start) * perT);
    const belongs = fit.misfits[s] <= fit.limits[s];
    const { symbol, off } = belongs ? { symbol: '', off: NaN } : excludingElement(input, fit, s);
    return {
      sample,
      F,
      FSigma: (F * Math.abs(perT)) / Math.sqrt(curvature),
      chiSquare: fit.misfits[s],
      degreesOfFreedom: fit.freedom[s],
      probability: 1 - jStat.chisquare.cdf(fit.misfits[s], fit.freedom[s]),
      belongs,
      excludedBy: symbol,
      off,
    };
  });
  return { elements, samples, reference, parentName: input.names[parentAt] };
}

/** Ratio of the most to the least incompatible element against the inverse of the latter: straight under mixing. */
function companionOf(input: DescentInput, elements: readonly DescentElement[]): CompanionTest {
  const J = input.elements.length + input.isotopes.length;
  const byD = elements.map(({ D }, e) => ({ D, e })).sort((a, b) => a.D - b.D);
  const [top, bottom] = [byD[0].e, byD[byD.length - 1].e];
  const points: { x: number; y: number; w: number }[] = [];
  for (let s = 0; s < input.samples; s++) {
    const [a, b] = [input.values[s * J + top], input.values[s * J + bottom]];
    if (Number.isNaN(a) || Number.isNaN(b)) continue;
    const y = Math.exp(a - b);
    points.push({ x: Math.exp(-b), y, w: 1 / (y * Math.hypot(input.sigma[s * J + top], input.sigma[s * J + bottom])) ** 2 });
  }
  const scale = Math.max(...points.map(({ x }) => x));
  // Weighted parabola y = c0 + c1·u + c2·u² with u about its mean; the last term over its error is the bend.
  const total = points.reduce((sum, { w }) => sum + w, 0);
  const mean = points.reduce((sum, { x, w }) => sum + (w * x) / scale, 0) / total;
  const S = [0, 0, 0, 0, 0];
  const T = [0, 0, 0];
  for (const { x, y, w } of points) {
    const u = x / scale - mean;
    for (let k = 0; k <= 4; k++) S[k] += w * u ** k;
    for (let k = 0; k <= 2; k++) T[k] += w * u ** k * y;
  }
  const det = (m: number[][]) =>
    m[0][0] * (m[1][1] * m[2][2] - m[1][2] * m[2][1]) -
    m[0][1] * (m[1][0] * m[2][2] - m[1][2] * m[2][0]) +
    m[0][2] * (m[1][0] * m[2][1] - m[1][1] * m[2][0]);
  const normal = [
    [S[0], S[1], S[2]],
    [S[1], S[2], S[3]],
    [S[2], S[3], S[4]],
  ];
  const D = det(normal);
  const c2 = det(normal.map((row, i) => [row[0], row[1], T[i]])) / D;
  const variance = (S[0] * S[2] - S[1] ** 2) / D;
  const [mx, my] = [points.reduce((sum, { x }) => sum + x, 0) / points.length, points.reduce((sum, { y }) => sum + y, 0) / points.length];
  const co = (f: (p: { x: number; y: number }) => number) => points.reduce((sum, p) => sum + f(p), 0);
  const correlation = co(({ x, y }) => (x - mx) * (y - my)) / Math.sqrt(co(({ x }) => (x - mx) ** 2) * co(({ y }) => (y - my) ** 2));
  return { y: `${input.elements[top]}/${input.elements[bottom]}`, x: `1/${input.elements[bottom]}`, correlation, bend: c2 / Math.sqrt(variance) };
}

/**
 * Tests a suite as one liquid line of descent, on all samples at once: slopes in log–log space with the bulk D they mean, F and parent by the most
 * incompatible element (Minster & Allègre's treatment), the samples that cannot belong with the element that excludes each, and crystallisation,
 * mixing and assimilation compared on the same data.
 *
 * @param suite n ≥ 5 samples with at least 4 elements in ppm; isotope ratios are used where they are there
 * @param options `analytes`, `isotopes`, `incompatible` with `incompatibleD`, `parent`, `assimilant`, `relativeError`, `scatter`, `ratioError`,
 *   `level`
 * @returns elements (slope, D, parent ppm), samples (F, chi-square, whether they belong), rivals by BIC, the companion test, and the finding in words
 * @throws RangeError naming the bad argument, or too few samples or elements
 * @source Allègre et al. 1977; Minster & Allègre 1978; Langmuir et al. 1978 (companion plot); DePaolo 1981; Kass & Raftery 1995 (words for
 *   differences in BIC). D is taken as constant along the line: a change of assemblage bends the line and shows as misfit
 * @example fitDescent(suite.where({ volcano: 'Ketu' })).why
 */
export function fitDescent(suite: Suite, options: FitDescentOptions = {}): DescentFit {
  const who = 'fitDescent';
  if (!(suite instanceof Suite)) throw new TypeError(`${who}: the first argument must be a suite.`);
  const fraction = (value: number | undefined, name: string, usual: number) => readNumber(value ?? usual, who, name, { from: 0, to: 1, open: 'to' });
  const errors = {
    relative: fraction(options.relativeError, 'relativeError', 0.05),
    scatter: options.scatter === 'estimate' ? 0 : fraction(options.scatter, 'scatter', 0.03),
    ratio: options.ratioError === undefined ? undefined : fraction(options.ratioError, 'ratioError', 0),
  };
  if (errors.relative + errors.scatter === 0 && options.scatter !== 'estimate')
    throw new RangeError(`${who}: relativeError and scatter are both 0; something must be uncertain.`);
  const level = readNumber(options.level ?? 0.01, who, 'level', { from: 0, to: 1, open: 'both' });
  if (options.scatter === 'estimate')
    errors.scatter = estimateScatter((scatter) => gatherDescent(suite, options.analytes, options.isotopes, { ...errors, scatter }, who));
  const input = gatherDescent(suite, options.analytes, options.isotopes, errors, who);
  const assimilant = options.assimilant === undefined ? undefined : oneAnalysis(options.assimilant, who, 'assimilant');
  const { fits, r, notes } = fitRivals(input, level, assimilant, who);
  if (input.left.length > 0) notes.push(`Left out for too few elements: ${input.left.join(', ')}.`);
  const line = describeLine(input, fits.get('crystallisation')!, options, who);
  const best = Math.min(...[...fits.values()].map(({ bic }) => bic));
  const rivals = [...fits]
    .map(
      ([process, fit]): DescentRival => ({
        process,
        misfit: fit.misfit,
        parameters: fit.model.free,
        bic: fit.bic,
        difference: fit.bic - best,
        unexplained: input.names.filter((_, s) => fit.misfits[s] > fit.limits[s]),
      }),
    )
    .sort((a, b) => a.bic - b.bic);
  const lead = rivals[1].difference;
  const preferred = mostUnexplained(rivals, input.samples) ? 'none of these' : lead < evidenceNeeded ? 'not distinguished' : rivals[0].process;
  const companion = companionOf(input, line.elements);
  notes.push(
    `Errors: elements ${100 * errors.relative} % where they have none of their own, with ${Number((100 * errors.scatter).toFixed(1))} % scatter of the lavas. ` +
      `F is by ${input.elements[line.reference]}, taken as D = ${options.incompatibleD ?? 0}.`,
  );
  const why = descentFindings(rivals, line.samples);
  const because = step(
    who,
    {
      samples: input.samples,
      elements: [...input.elements],
      isotopes: [...input.isotopes],
      relative: errors.relative,
      scatter: errors.scatter,
      ratio: errors.ratio ?? 'usual',
      level,
      incompatible: input.elements[line.reference],
      incompatibleD: options.incompatibleD ?? 0,
      parent: line.parentName,
      preferred,
    },
    {
      sources: ['allegre_1977', 'minster_allegre_1978', 'langmuir_1978', 'kass_raftery_1995', ...(assimilant === undefined ? [] : ['depaolo_1981'])],
      says: `${input.samples} samples were held against one liquid line of descent, mixing and assimilation; preferred: ${preferred}.`,
    },
  );
  const lineage = [...joinLineage(suite.lineage, assimilant?.lineage ?? []), because];
  const parent = suiteOf({
    columns: line.elements.map(({ element, parent: value, parentSigma }) =>
      derivedColumn(element, Float64Array.of(value), 'ppm', Float64Array.of(value * parentSigma), 'element'),
    ),
    labels: { sample: ['parent of the line'] },
    lineage,
  });
  const result = {
    elements: line.elements,
    samples: line.samples,
    parent,
    incompatible: input.elements[line.reference],
    rivals,
    preferred,
    r,
    companion,
    scatter: errors.scatter,
    why,
    notes,
    lineage,
  } satisfies Omit<DescentFit, 'toMimeBundle'>;
  return showAs(result, descentView);
}
