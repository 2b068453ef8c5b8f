import { jStat } from 'jstat';
import { findAnalyte } from '../chemistry';
import { resolveColumn, type Suite } from '../suite';
import { assimilationModel, crystallisationModel, mixingModel, type DescentData, type DescentModel, type DescentProcess } from './descent-laws';
import { isotopeElement, usualRatioError } from './isotopes';
import { fitLatent, fitSample, sampleMisfit } from './latent-fit';
import { amountOf } from './one-analysis';

/** @internal Which samples and quantities a fit uses. */
export interface DescentInput extends DescentData {
  /** Row of each sample in the suite. */
  readonly rows: readonly number[];
  readonly names: readonly string[];
  readonly left: readonly string[];
}

/** @internal Gathers logs of elements and isotope ratios with their σ; samples with too few elements are left out by name. */
export function gatherDescent(
  suite: Suite,
  wanted: readonly string[] | undefined,
  ratios: readonly string[] | undefined,
  errors: { relative: number; scatter: number; ratio: number | undefined },
  who: string,
): DescentInput {
  const usableShare = (symbol: string) => {
    const column = resolveColumn(suite, symbol);
    return column === undefined ? 0 : column.values.reduce((count, value) => count + (value > 0 ? 1 : 0), 0) / suite.size;
  };
  for (const symbol of wanted ?? []) {
    if (findAnalyte(symbol)?.kind !== 'element')
      throw new RangeError(`${who}: analytes holds "${String(symbol)}", which is not an element symbol (Ti stands for TiO2, K for K2O).`);
    if (usableShare(symbol) === 0) throw new RangeError(`${who}: the suite has no usable value of ${symbol}.`);
  }
  const elements = wanted ?? suite.analytes.filter((symbol) => findAnalyte(symbol)?.kind === 'element' && usableShare(symbol) >= 0.8);
  if (elements.length < 4)
    throw new RangeError(
      `${who}: ${elements.length} elements have a usable value in four samples of five (${elements.join(', ') || 'none'}); the fit needs ` +
        `4. Name others in analytes.`,
    );
  const all =
    ratios ??
    suite.analytes.filter(
      (symbol) => isotopeElement(symbol) !== undefined && elements.includes(isotopeElement(symbol)!) && usableShare(symbol) >= 0.5,
    );
  for (const symbol of all) {
    const element = isotopeElement(symbol);
    if (element === undefined) throw new RangeError(`${who}: isotopes holds "${String(symbol)}", which is not an isotope ratio of one element.`);
    if (!elements.includes(element)) throw new RangeError(`${who}: ${symbol} needs ${element} among the analytes.`);
  }
  const columns = [...elements, ...all].map((symbol) => resolveColumn(suite, symbol)!);
  const J = columns.length;
  const rows: number[] = [];
  const left: string[] = [];
  for (let i = 0; i < suite.size; i++) {
    let count = 0;
    for (let e = 0; e < elements.length; e++) if (columns[e].values[i] > 0) count++;
    if (count >= Math.max(4, Math.ceil(elements.length / 2))) rows.push(i);
    else left.push(suite.samples[i]);
  }
  if (rows.length < 5) throw new RangeError(`${who}: only ${rows.length} samples have at least half of the elements; the fit needs 5.`);
  const values = new Float64Array(rows.length * J).fill(NaN);
  const sigma = new Float64Array(rows.length * J).fill(NaN);
  rows.forEach((row, s) =>
    columns.forEach((column, j) => {
      const value = column.values[row];
      if (!(value > 0)) return;
      const own = column.sigma?.[row] ?? NaN;
      values[s * J + j] = j < elements.length ? Math.log(value) : value;
      sigma[s * J + j] =
        j < elements.length
          ? Math.hypot(own > 0 ? own / value : errors.relative, errors.scatter)
          : Math.max(own > 0 ? own : 0, (errors.ratio ?? usualRatioError(column.symbol)) * value);
    }),
  );
  return {
    samples: rows.length,
    elements,
    isotopes: all,
    carriers: all.map((symbol) => elements.indexOf(isotopeElement(symbol)!)),
    values,
    sigma,
    rows,
    names: rows.map((row) => suite.samples[row]),
    left,
  };
}

/** @internal A process fitted to the samples that it can explain. */
export interface FittedProcess {
  readonly model: DescentModel;
  readonly misfits: Float64Array;
  readonly counted: Uint8Array;
  readonly freedom: Int32Array;
  /** The misfit at which a sample counts as not explained. */
  readonly limits: Float64Array;
  /** Σ of the samples' misfits, each at most its limit. */
  readonly misfit: number;
  readonly bic: number;
  readonly data: number;
}

/**
 * @internal Fits a process again and again, leaving out the samples that it cannot explain, until the same ones are out twice. A sample is out
 * when its misfit has a probability below level/samples: with all samples in line, a false alarm anywhere has the probability `level`.
 */
export function fitRobustly(input: DescentInput, level: number, make: (counted: Uint8Array) => DescentModel, mostRounds = 12): FittedProcess {
  const { samples, values } = input;
  const J = input.elements.length + input.isotopes.length;
  const freedom = new Int32Array(samples);
  const limits = new Float64Array(samples);
  let data = 0;
  const limitOf = new Map<number, number>();
  for (let s = 0; s < samples; s++) {
    let count = 0;
    for (let j = 0; j < J; j++) if (!Number.isNaN(values[s * J + j])) count++;
    data += count;
    freedom[s] = count - 1;
    if (!limitOf.has(freedom[s])) limitOf.set(freedom[s], jStat.chisquare.inv(1 - level / samples, freedom[s]));
    limits[s] = limitOf.get(freedom[s])!;
  }
  const counted = new Uint8Array(samples).fill(1);
  let model = make(counted);
  let misfits = fitLatent(model.problem, model.scan);
  for (let round = 0; round < mostRounds; round++) {
    const out = Array.from(misfits, (misfit, s) => ({ s, over: misfit / limits[s] }))
      .filter(({ over }) => over > 1)
      .sort((a, b) => b.over - a.over);
    // The worst go first and at most a fifth at once, for one bad sample can make good ones look bad.
    const allowed = Math.max(1, Math.floor(samples / 5)) + (samples - counted.reduce((sum, each) => sum + each, 0));
    const next = new Uint8Array(samples).fill(1);
    for (const { s } of out.slice(0, Math.min(allowed, Math.floor(samples / 2)))) next[s] = 0;
    if (next.every((each, s) => each === counted[s])) break;
    counted.set(next);
    model = { ...model, problem: { ...model.problem, counted } };
    misfits = fitLatent(model.problem, 0);
  }
  const misfit = misfits.reduce((sum, each, s) => sum + Math.min(each, limits[s]), 0);
  return { model, misfits, counted, freedom, limits, misfit, bic: misfit + model.free * Math.log(data), data };
}

/** @internal The element whose absence would do most for a sample, and by how many σ it is off when the others place the sample. */
export function excludingElement(input: DescentInput, fit: FittedProcess, s: number): { symbol: string; off: number } {
  const { problem } = fit.model;
  const J = problem.observables;
  let [best, least, off] = [-1, Infinity, NaN];
  for (let j = 0; j < J; j++) {
    const value = input.values[s * J + j];
    if (Number.isNaN(value)) continue;
    const hidden = fitSample(problem, s, problem.hidden[s], j, fit.model.scan);
    const misfit = sampleMisfit(problem, s, hidden, j);
    if (misfit < least) {
      [best, least] = [j, misfit];
      off = (value - problem.predict(j, problem.parameters, hidden)) / input.sigma[s * J + j];
    }
  }
  return { symbol: [...input.elements, ...input.isotopes][best], off };
}

/** @internal Fits the three processes; assimilation only where an assimilant is given. */
export function fitRivals(
  input: DescentInput,
  level: number,
  assimilant: Suite | undefined,
  who: string,
): { fits: Map<DescentProcess, FittedProcess>; r: number; notes: string[] } {
  const fits = new Map<DescentProcess, FittedProcess>();
  const notes: string[] = [];
  fits.set(
    'crystallisation',
    fitRobustly(input, level, (counted) => crystallisationModel(input, counted)),
  );
  fits.set(
    'mixing',
    fitRobustly(input, level, (counted) => mixingModel(input, counted)),
  );
  if (assimilant === undefined) {
    notes.push('Assimilation was not compared: give the assimilant.');
    return { fits, r: NaN, notes };
  }
  const lacking = [...input.elements, ...input.isotopes].filter((symbol) => !(amountOf(assimilant, symbol) > 0));
  if (lacking.length > 0)
    throw new RangeError(`${who}: the assimilant has no usable ${lacking.join(', ')}; give it, or leave it out of analytes and isotopes.`);
  const rock = {
    amounts: Float64Array.from(input.elements, (symbol) => amountOf(assimilant, symbol)),
    ratios: Float64Array.from(input.isotopes, (symbol) => amountOf(assimilant, symbol)),
  };
  let best: { r: number; fit: FittedProcess } | undefined;
  const attempt = (r: number) => {
    // The rate is chosen by one fit each; samples are left out at the chosen one alone.
    const fit = fitRobustly(input, level, (counted) => assimilationModel(input, counted, rock, r), 0);
    if (best === undefined || fit.bic < best.fit.bic) best = { r, fit };
  };
  for (const r of [0.05, 0.15, 0.3, 0.5, 0.7]) attempt(r);
  const around = best!.r;
  for (const r of [around * 0.75, around * 1.25]) attempt(r);
  fits.set(
    'assimilation',
    fitRobustly(input, level, (counted) => assimilationModel(input, counted, rock, best!.r)),
  );
  return { fits, r: best!.r, notes };
}

/** Median misfit of the samples over their degrees of freedom, under the better of crystallisation and mixing. */
function medianMisfit(input: DescentInput): number {
  const medians = [crystallisationModel, mixingModel].map((make) => {
    const { misfits, freedom } = fitRobustly(input, 0.01, (counted) => make(input, counted), 0);
    const ratios = misfits.map((misfit, s) => misfit / Math.max(1, freedom[s])).sort();
    return ratios[Math.floor(ratios.length / 2)];
  });
  return Math.min(...medians);
}

/**
 * @internal The relative scatter of the lavas at which half of the samples misfit by more than their degrees of freedom: found by halving, between none
 * and 100 %.
 */
export function estimateScatter(gather: (scatter: number) => DescentInput): number {
  if (medianMisfit(gather(1e-6)) <= 1) return 0;
  let [low, high] = [1e-3, 1];
  for (let round = 0; round < 12 && high / low > 1.02; round++) {
    const middle = Math.sqrt(low * high);
    if (medianMisfit(gather(middle)) > 1) low = middle;
    else high = middle;
  }
  return Math.sqrt(low * high);
}
