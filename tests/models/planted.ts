/** Pairs with a known answer: a daughter, what left its parent, and the parent that follows. */
import { seededRandom, type SeededRandom } from '../../kernel-lib/chemistry';
import { chooseMineral } from '../../kernel-lib/models/minerals';

export type Analysis = Record<string, number>;
export const oxides = ['SiO2', 'TiO2', 'Al2O3', 'FeOT', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'];

export const seededDraws = (seed: number): SeededRandom => seededRandom(seed, 'test');

/** An invented andesite, different every time. */
export function daughterOf(random: SeededRandom): Analysis {
  const silica = 56 + 8 * random.uniform();
  const raw: Analysis = {
    SiO2: silica,
    TiO2: 0.7 + 0.4 * random.uniform(),
    Al2O3: 15.5 + 2 * random.uniform(),
    FeOT: 9 - 0.45 * (silica - 56),
    MnO: 0.16,
    MgO: 3.6 - 0.25 * (silica - 56),
    CaO: 7.4 - 0.35 * (silica - 56),
    Na2O: 3.4 + 0.8 * random.uniform(),
    K2O: 1.1 + 0.14 * (silica - 56),
    P2O5: 0.2,
  };
  return scaled(raw);
}

export function scaled(raw: Analysis): Analysis {
  const sum = oxides.reduce((total, oxide) => total + (raw[oxide] ?? 0), 0);
  return Object.fromEntries(oxides.map((oxide) => [oxide, (100 * (raw[oxide] ?? 0)) / sum]));
}

/** The parent that gives the daughter when the planted masses (relative to the parent) of minerals leave it. */
export function plantedParent(
  daughter: Analysis,
  planted: Record<string, readonly [string, number]>,
  taken?: { composition: Analysis; mass: number },
): { parent: Analysis; minerals: Record<string, string>; masses: Record<string, number> } {
  const masses: Record<string, number> = Object.fromEntries(Object.entries(planted).map(([name, [, mass]]) => [name, mass]));
  masses.liquid = 1 - Object.values(masses).reduce((sum, mass) => sum + mass, 0) + (taken?.mass ?? 0);
  const parent: Analysis = {};
  const full = scaled(daughter);
  for (const oxide of oxides) {
    parent[oxide] = masses.liquid * full[oxide] - (taken === undefined ? 0 : taken.mass * scaled(taken.composition)[oxide]);
    for (const [name, [label, mass]] of Object.entries(planted)) parent[oxide] += mass * (chooseMineral(name, label, 'test').oxides.get(oxide) ?? 0);
  }
  return { parent, minerals: Object.fromEntries(Object.entries(planted).map(([name, [label]]) => [name, label])), masses };
}

/** Each value with a relative normal error. */
export function noisy(analysis: Analysis, relative: number, random: SeededRandom): Analysis {
  return Object.fromEntries(Object.entries(analysis).map(([symbol, value]) => [symbol, Math.max(0, value * (1 + relative * random.normal()))]));
}
