import { openSystemLiquid, chamberTime } from './open-system-laws';
import type { LatentProblem } from './latent-fit';

/** The observations of a suite: traces as ln C, then isotope ratios as they are. */
export interface DescentData {
  readonly samples: number;
  readonly elements: readonly string[];
  readonly isotopes: readonly string[];
  /** For each isotope ratio the place of its element among the elements. */
  readonly carriers: readonly number[];
  /** samples × (elements + isotopes) */
  readonly values: Float64Array;
  readonly sigma: Float64Array;
}

/** The processes that a suite is tested for. */
export type DescentProcess = 'crystallisation' | 'mixing' | 'assimilation';

/** A process made ready for fitting, and how many free parameters it has besides one a sample. */
export interface DescentModel {
  readonly process: DescentProcess;
  readonly problem: LatentProblem;
  readonly scan: number;
  /** Free parameters, hidden numbers included, less what can be traded between them without a change. */
  readonly free: number;
}

/** Means and a first guess of the hidden number from the leading direction of the logs. */
function firstGuess(data: DescentData): { mean: Float64Array; slope: Float64Array; hidden: Float64Array } {
  const { samples, elements, isotopes, values } = data;
  const [E, J] = [elements.length, elements.length + isotopes.length];
  const mean = new Float64Array(E);
  for (let e = 0; e < E; e++) {
    let [sum, count] = [0, 0];
    for (let s = 0; s < samples; s++) if (!Number.isNaN(values[s * J + e])) [sum, count] = [sum + values[s * J + e], count + 1];
    mean[e] = sum / count;
  }
  const direction = new Float64Array(E).fill(1);
  let widest = 0;
  for (let e = 0; e < E; e++) {
    let sum = 0;
    for (let s = 0; s < samples; s++) if (!Number.isNaN(values[s * J + e])) sum += (values[s * J + e] - mean[e]) ** 2;
    direction[e] = sum;
    if (sum > direction[widest]) widest = e;
  }
  direction.fill(0);
  direction[widest] = 1;
  const hidden = new Float64Array(samples);
  // Power iteration on the covariance, gaps left out.
  for (let round = 0; round < 60; round++) {
    for (let s = 0; s < samples; s++) {
      let [top, bottom] = [0, 0];
      for (let e = 0; e < E; e++) {
        const value = values[s * J + e];
        if (Number.isNaN(value)) continue;
        top += direction[e] * (value - mean[e]);
        bottom += direction[e] ** 2;
      }
      hidden[s] = bottom > 0 ? top / bottom : 0;
    }
    for (let e = 0; e < E; e++) {
      let [top, bottom] = [0, 0];
      for (let s = 0; s < samples; s++) {
        const value = values[s * J + e];
        if (Number.isNaN(value)) continue;
        top += hidden[s] * (value - mean[e]);
        bottom += hidden[s] ** 2;
      }
      direction[e] = bottom > 0 ? top / bottom : 0;
    }
    let size = 0;
    for (let e = 0; e < E; e++) size += direction[e] ** 2;
    for (let e = 0; e < E; e++) direction[e] /= Math.sqrt(size) || 1;
  }
  return { mean, slope: direction, hidden };
}

function isotopeMean(data: DescentData, i: number): number {
  const J = data.elements.length + data.isotopes.length;
  let [sum, count] = [0, 0];
  for (let s = 0; s < data.samples; s++) {
    const value = data.values[s * J + data.elements.length + i];
    if (!Number.isNaN(value)) [sum, count] = [sum + value, count + 1];
  }
  return sum / count;
}

/** Crystallisation: ln C = a + b·t, straight lines in log–log space; isotope ratios do not change. */
export function crystallisationModel(data: DescentData, counted: Uint8Array): DescentModel {
  const [E, I] = [data.elements.length, data.isotopes.length];
  const { mean, slope, hidden } = firstGuess(data);
  const parameters = new Float64Array(2 * (E + I));
  for (let e = 0; e < E; e++) [parameters[2 * e], parameters[2 * e + 1]] = [mean[e], slope[e]];
  for (let i = 0; i < I; i++) parameters[2 * (E + i)] = isotopeMean(data, i);
  const counts = new Uint8Array(E + I).fill(2, 0, E).fill(1, E);
  return {
    process: 'crystallisation',
    scan: 0,
    free: 2 * E + I + data.samples - 2,
    problem: {
      samples: data.samples,
      observables: E + I,
      values: data.values,
      sigma: data.sigma,
      counts,
      parameters,
      hidden,
      from: -50,
      to: 50,
      counted,
      predict: (j, p, t) => (j < E ? p[2 * j] + p[2 * j + 1] * t : p[2 * j]),
    },
  };
}

/** Mixing: C = A + B·g, straight lines in plain space; isotope ratios weighted by their element. */
export function mixingModel(data: DescentData, counted: Uint8Array): DescentModel {
  const [E, I] = [data.elements.length, data.isotopes.length];
  const { mean, slope, hidden } = firstGuess(data);
  const [low, high] = [Math.min(...hidden), Math.max(...hidden)];
  const span = high - low || 1;
  const parameters = new Float64Array(2 * (E + I));
  for (let e = 0; e < E; e++) {
    const [first, second] = [low, high].map((t) => Math.exp(mean[e] + slope[e] * t));
    [parameters[2 * e], parameters[2 * e + 1]] = [first, second - first];
  }
  for (let i = 0; i < I; i++) {
    const carrier = data.carriers[i];
    const ratio = isotopeMean(data, i);
    [parameters[2 * (E + i)], parameters[2 * (E + i) + 1]] = [ratio * parameters[2 * carrier], ratio * parameters[2 * carrier + 1]];
  }
  return {
    process: 'mixing',
    scan: 24,
    free: 2 * E + 2 * I + data.samples - 2,
    problem: {
      samples: data.samples,
      observables: E + I,
      values: data.values,
      sigma: data.sigma,
      counts: new Uint8Array(E + I).fill(2),
      parameters,
      hidden: hidden.map((t) => (t - low) / span),
      from: -0.6,
      to: 1.6,
      counted,
      predict: (j, p, g) => {
        if (j < E) return Math.log(p[2 * j] + p[2 * j + 1] * g);
        const carrier = data.carriers[j - E];
        return (p[2 * j] + p[2 * j + 1] * g) / (p[2 * carrier] + p[2 * carrier + 1] * g);
      },
    },
  };
}

/**
 * Assimilation with crystallisation, for one rate r and a known assimilant: an element has its start (as ln C0) and its D (as ln D, so that it stays
 * positive); an isotope ratio has its start.
 */
export function assimilationModel(
  data: DescentData,
  counted: Uint8Array,
  assimilant: { readonly amounts: Float64Array; readonly ratios: Float64Array },
  r: number,
): DescentModel {
  const [E, I] = [data.elements.length, data.isotopes.length];
  const { mean, slope, hidden } = firstGuess(data);
  // The hidden number is −ln F; the element that rises most along the first guess sets its direction and scale.
  const rising = [...slope].reduce((best, each, e) => (each > slope[best] ? e : best), 0);
  const falling = [...slope].reduce((best, each, e) => (each < slope[best] ? e : best), 0);
  // Enriched elements are the more numerous: orient by the sum of the slopes.
  const sign = slope.reduce((sum, each) => sum + Math.sign(each), 0) >= 0 ? 1 : -1;
  const fastest = Math.max(Math.abs(slope[sign > 0 ? rising : falling]), 1e-9);
  const times = hidden.map((t) => sign * t * fastest);
  const least = Math.min(...times);
  const q = r - 1;
  const parameters = new Float64Array(2 * (E + I));
  for (let e = 0; e < E; e++) {
    const b = (sign * slope[e]) / fastest;
    parameters[2 * e] = mean[e] + b * least;
    parameters[2 * e + 1] = Math.log(Math.max(0.02, 1 - b));
  }
  for (let i = 0; i < I; i++) parameters[2 * (E + i)] = isotopeMean(data, i);
  const liquid = (p: Float64Array, e: number, time: number) =>
    openSystemLiquid(Math.exp(p[2 * e]), r * assimilant.amounts[e], Math.exp(p[2 * e + 1]), q, time);
  return {
    process: 'assimilation',
    scan: 16,
    free: 2 * E + I + data.samples - 1 + 1,
    problem: {
      samples: data.samples,
      observables: E + I,
      values: data.values,
      sigma: data.sigma,
      counts: new Uint8Array(E + I).fill(2, 0, E).fill(1, E),
      parameters,
      hidden: times.map((t) => Math.max(0, t - least)),
      from: 0,
      to: 3,
      counted,
      rounds: 60,
      predict: (j, p, minusLogF) => {
        const time = chamberTime(Math.expm1(-minusLogF) / q, q);
        if (j < E) return Math.log(liquid(p, j, time));
        const e = data.carriers[j - E];
        const start = Math.exp(p[2 * e]) * p[2 * j];
        return openSystemLiquid(start, r * assimilant.amounts[e] * assimilant.ratios[j - E], Math.exp(p[2 * e + 1]), q, time) / liquid(p, e, time);
      },
    },
  };
}
