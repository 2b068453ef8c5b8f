import { chooseMineral } from './minerals';
import { ferricShareOf, settle, type LiquidThermometer } from './liquid-properties';
import { majorMasses, majors, place } from './liquid-state';
import { thermometers } from './melt-tables';
import { apatiteSolubility } from './saturation';
import { equilibriumOlivine, waterAtSaturation } from './thermometry';
import { majorsOf, type PathConditions, type ReadStage } from './whole-rock-options';

/** @internal The majors of a path, step by step (n + 1 states, n steps). */
export interface MajorsPath {
  readonly F: Float64Array;
  /** Liquid, wt %, state by state in the majors' order. */
  readonly liquid: Float64Array;
  /** Crystals of each step, wt %, step by step. */
  readonly crystals: Float64Array;
  /** Masses of the minerals in each step's crystals (share of the step), step by step; apatite last where it may join. */
  readonly shares: Float64Array;
  readonly stageOf: Int32Array;
  readonly temperature: Float64Array;
  readonly ferric: Float64Array;
  readonly water: Float64Array;
  /** Fo of the olivine in exchange, NaN where there is none. */
  readonly Fo: Float64Array;
  readonly notes: readonly string[];
}

/** @internal F from 1 through the end of every stage, each end exact, steps shared out by length. */
export function stageGrid(ends: readonly number[], steps: number): Float64Array {
  const total = 1 - ends[ends.length - 1];
  const F = [1];
  for (const end of ends) {
    const start = F[F.length - 1];
    const count = Math.max(1, Math.round((steps * (start - end)) / total));
    for (let i = 1; i <= count; i++) F.push(i === count ? end : start + ((end - start) * i) / count);
  }
  return Float64Array.from(F);
}

/** @internal Olivine of a given Fo (fraction), wt % in the majors' order. */
export function olivineOxides(Fo: number, out: Float64Array): Float64Array {
  const { molar } = majorMasses();
  out.fill(0);
  out[place.SiO2] = molar[place.SiO2];
  out[place.MgO] = 2 * Fo * molar[place.MgO];
  out[place.FeOT] = 2 * (1 - Fo) * molar[place.FeOT];
  const sum = out[place.SiO2] + out[place.MgO] + out[place.FeOT];
  for (let i = 0; i < majors; i++) out[i] *= 100 / sum;
  return out;
}

function temperatureAt(
  conditions: Required<PathConditions>,
  oxides: Float64Array,
  water: number,
  F: number,
  end: number,
): { temperature: number; ferric: number } {
  const { temperature, pressure, redox } = conditions;
  if (typeof temperature === 'string') return settle(oxides, temperature as LiquidThermometer, water, pressure, redox);
  const value = typeof temperature === 'number' ? temperature : temperature.from + ((1 - F) / (1 - end)) * (temperature.to - temperature.from);
  return { temperature: value, ferric: ferricShareOf(oxides, redox, value, pressure) };
}

/**
 * @internal Follows the majors by subtracting minerals. The path ends early, with a note, where an oxide is used up.
 *
 * @param names minerals of all stages, for the notes; shares has one place for each, and one for apatite
 */
export function followMajors(
  start: Float64Array,
  F: Float64Array,
  stages: readonly ReadStage[],
  names: readonly string[],
  conditions: Required<PathConditions> | undefined,
  withApatite: boolean,
  who: string,
): MajorsPath {
  const states = F.length;
  const width = names.length + 1;
  const liquid = new Float64Array(states * majors);
  const crystals = new Float64Array((states - 1) * majors);
  const shares = new Float64Array((states - 1) * width);
  const stageOf = new Int32Array(states);
  const [temperature, ferric, water, Fo] = Array.from({ length: 4 }, () => new Float64Array(states).fill(NaN));
  const notes: string[] = [];
  const apatite = withApatite ? majorsOf(chooseMineral('apatite', 'fluorapatite Ca5(PO4)3F', who)) : undefined;
  const now = start.slice();
  const olivine = new Float64Array(majors);
  const crystal = new Float64Array(majors);
  const left = new Float64Array(majors);
  const { value: Kd } = thermometers().exchange;
  const dissolved = conditions === undefined ? 0 : (100 * conditions.water) / (100 - conditions.water);
  let waterMass = dissolved;
  let [stage, ended, apatiteAt] = [0, states, NaN];
  for (let i = 0; i < states; i++) {
    liquid.set(now, i * majors);
    if (conditions !== undefined) {
      const limit = waterAtSaturation(conditions.pressure);
      let content = (100 * waterMass) / (waterMass + 100 * F[i]);
      if (content > limit && conditions.water > 0) {
        if (waterMass === dissolved)
          notes.push(
            `Water reaches saturation (${limit.toFixed(2)} wt % at ${conditions.pressure} bar) at F = ${F[i].toFixed(3)}; what is above ` +
              `it is lost as vapour.`,
          );
        content = limit;
        waterMass = (limit * 100 * F[i]) / (100 - limit);
      }
      water[i] = content;
      const settled = temperatureAt(conditions, now, content, F[i], F[states - 1]);
      temperature[i] = settled.temperature;
      ferric[i] = settled.ferric;
    }
    while (stage < stages.length - 1 && F[i] <= stages[stage].downTo + 1e-12) stage++;
    stageOf[i] = stage;
    const { places, shares: mass, compositions } = stages[stage];
    if (compositions.includes(undefined)) Fo[i] = equilibriumOlivine(now, ferric[i], Kd);
    if (i === states - 1) break;
    crystal.fill(0);
    for (let m = 0; m < places.length; m++) {
      const composition = compositions[m] ?? olivineOxides(Fo[i], olivine);
      for (let j = 0; j < majors; j++) crystal[j] += mass[m] * composition[j];
    }
    const [before, after] = [F[i], F[i + 1]];
    const step = before - after;
    let accessory = 0;
    if (apatite !== undefined) {
      // A prescribed temperature is known for the state after the step; a thermometer's is that of the state before it.
      const prescribed = typeof conditions!.temperature !== 'string';
      const limit = apatiteSolubility(
        now[place.SiO2],
        prescribed ? temperatureAt(conditions!, now, water[i], after, F[states - 1]).temperature : temperature[i],
      );
      accessory = (before * now[place.P2O5] - step * crystal[place.P2O5] - limit * after) / (step * (apatite[place.P2O5] - crystal[place.P2O5]));
      accessory = Math.min(1, Math.max(0, accessory));
      if (accessory > 0) {
        if (Number.isNaN(apatiteAt)) apatiteAt = before;
        for (let j = 0; j < majors; j++) crystal[j] = (1 - accessory) * crystal[j] + accessory * apatite[j];
      }
    }
    let used = '';
    for (let j = 0; j < majors; j++) {
      const next = (before * now[j] - step * crystal[j]) / after;
      if (next < -1e-9 && used === '') used = Object.keys(place)[j];
      crystal[j] = next < 0 && next >= -1e-9 ? (before * now[j]) / step : crystal[j];
      left[j] = Math.max(0, next);
    }
    if (used !== '') {
      ended = i + 1;
      notes.push(`The path ends at F = ${before.toFixed(3)}: ${used} would be used up by ${names.filter((_, m) => places.includes(m)).join(', ')}.`);
      break;
    }
    now.set(left);
    crystals.set(crystal, i * majors);
    for (let m = 0; m < places.length; m++) shares[i * width + places[m]] = mass[m] * (1 - accessory);
    shares[i * width + names.length] = accessory;
  }
  if (!Number.isNaN(apatiteAt)) notes.push(`Apatite joins at F = ${apatiteAt.toFixed(3)}.`);
  return {
    F: F.slice(0, ended),
    liquid: liquid.slice(0, ended * majors),
    crystals: crystals.slice(0, (ended - 1) * majors),
    shares: shares.slice(0, (ended - 1) * width),
    stageOf: stageOf.slice(0, ended),
    temperature: temperature.slice(0, ended),
    ferric: ferric.slice(0, ended),
    water: water.slice(0, ended),
    Fo: Fo.slice(0, ended),
    notes,
  };
}
