import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { coefficientsFor, massBalance, MissingCoefficientsError, rankAssemblages, testTraces } from 'wedgework';
import type { SeededRandom } from '../../kernel-lib/chemistry';
import { daughterOf, noisy, plantedParent, scaled, seededDraws, type Analysis } from './planted';

const labels = { olivine: 'Fo80', clinopyroxene: 'Wo42En46Fs12', plagioclase: 'An75', magnetite: 'Usp30' } as const;
const elements = ['Rb', 'Sr', 'Ba', 'Zr', 'Y', 'Nb', 'Cr', 'Ce', 'Nd', 'Sm', 'Yb'];
const sets = ['basalt', 'andesite'] as const;
const preferred = (mineral: string, element: string) =>
  sets.map((set) => coefficientsFor(mineral, set, element)[0]?.value).find((value) => value !== undefined);

function basalt(random: SeededRandom): Analysis {
  const between = (low: number, high: number) => low + (high - low) * random.uniform();
  const majors = scaled({
    SiO2: between(50, 52),
    TiO2: between(0.8, 1.1),
    Al2O3: between(16, 18),
    FeOT: between(8.5, 10),
    MnO: 0.17,
    MgO: between(6, 8.5),
    CaO: between(9.8, 11),
    Na2O: between(2.3, 2.9),
    K2O: between(0.4, 0.9),
    P2O5: between(0.15, 0.22),
  });
  return {
    ...majors,
    Rb: between(8, 20),
    Ba: between(150, 300),
    Sr: between(350, 600),
    Zr: between(50, 100),
    Y: between(18, 25),
    Nb: between(1.5, 4),
    Cr: between(80, 300),
    Ce: between(14, 28),
    Nd: between(9, 16),
    Sm: between(2.4, 3.6),
    Yb: between(1.8, 2.5),
  };
}

function rhyolite(random: SeededRandom): Analysis {
  const between = (low: number, high: number) => low + (high - low) * random.uniform();
  const majors = scaled({
    SiO2: between(71, 75),
    TiO2: between(0.15, 0.4),
    Al2O3: between(13, 14.8),
    FeOT: between(1.5, 3),
    MnO: 0.06,
    MgO: between(0.2, 0.8),
    CaO: between(1, 2.4),
    Na2O: between(3.4, 4.2),
    K2O: between(2.6, 4.4),
    P2O5: between(0.04, 0.1),
  });
  return {
    ...majors,
    Rb: between(70, 180),
    Ba: between(500, 1100),
    Sr: between(80, 250),
    Zr: between(120, 350),
    Y: between(20, 50),
    Nb: between(5, 14),
    Cr: between(1, 6),
    Ce: between(40, 100),
    Nd: between(18, 45),
    Sm: between(3.5, 9),
    Yb: between(2, 5),
  };
}

const solve = (parent: Analysis, daughter: Analysis, seed: number) =>
  massBalance({
    parent,
    daughter,
    seed,
    draws: 60,
    errors: { relative: 0.02, floor: 0.02 },
    minerals: {
      olivine: { between: ['Fo65', 'Fo90'] },
      clinopyroxene: labels.clinopyroxene,
      plagioclase: { between: ['An45', 'An92'] },
      magnetite: labels.magnetite,
    },
  });

describe('testTraces', () => {
  it('rejects mixtures offered as crystallisation pairs in at least 90 % of cases', () => {
    const random = seededDraws(77);
    let rejected = 0;
    for (let i = 0; i < 100; i++) {
      const [mafic, felsic] = [basalt(random), rhyolite(random)];
      const share = 0.2 + 0.35 * random.uniform();
      const mixture = Object.fromEntries(Object.keys(mafic).map((symbol) => [symbol, (1 - share) * mafic[symbol] + share * felsic[symbol]]));
      const test = testTraces(solve(noisy(mafic, 0.02, random), noisy(mixture, 0.02, random), i), { relativeError: 0.02 });
      if (test.verdict === 'rejected') rejected++;
    }
    expect(rejected / 100).toBeGreaterThanOrEqual(0.9);
  });

  it('does not reject true pairs, and accepts most', () => {
    const random = seededDraws(78);
    const counts = { accepted: 0, rejected: 0, undecided: 0 };
    for (let i = 0; i < 100; i++) {
      const daughter = daughterOf(random);
      const { parent, masses } = plantedParent(daughter, {
        olivine: [labels.olivine, 0.03 + 0.07 * random.uniform()],
        clinopyroxene: [labels.clinopyroxene, 0.06 + 0.14 * random.uniform()],
        plagioclase: [labels.plagioclase, 0.12 + 0.2 * random.uniform()],
        magnetite: [labels.magnetite, 0.02 + 0.03 * random.uniform()],
      });
      const traces = basalt(random);
      for (const element of elements) {
        const K = Object.keys(labels).map((mineral) => preferred(mineral, element));
        if (K.some((value) => value === undefined)) continue;
        const crystals = 1 - masses.liquid;
        const D = Object.keys(labels).reduce((sum, mineral, m) => sum + (masses[mineral] / crystals) * K[m]!, 0);
        parent[element] = traces[element];
        daughter[element] = traces[element] * masses.liquid ** (D - 1);
      }
      counts[testTraces(solve(noisy(parent, 0.02, random), noisy(daughter, 0.02, random), i), { relativeError: 0.02, meltTypes: sets }).verdict]++;
    }
    expect(counts.rejected).toBeLessThanOrEqual(5);
    expect(counts.accepted).toBeGreaterThanOrEqual(60);
  });

  it('shows each coefficient with its range and source, and says what is missing', () => {
    const random = seededDraws(79);
    const daughter = daughterOf(random);
    const { parent } = plantedParent(daughter, { olivine: ['Fo80', 0.05], plagioclase: ['An75', 0.2] });
    const balance = massBalance({
      parent: { ...parent, Ba: 200, Cs: 1, Sr: 500 },
      daughter: { ...daughter, Ba: 260, Cs: 1.3, Sr: 480 },
      minerals: { olivine: 'Fo80', plagioclase: 'An75' },
    });
    const test = testTraces(balance);
    expect(test.elements.map(({ element }) => element)).toEqual(['Ba', 'Sr']);
    // The tables hold Cs for plagioclase in rhyolite, and none for olivine.
    expect(test.missing.map(({ mineral, analyte }) => `${mineral} ${analyte}`)).toEqual(['olivine Cs']);
    expect(test.notes.join(' ')).toMatch(/missing .*Cs in olivine/);
    for (const { low, high, value, source } of test.coefficients) {
      expect(low).toBeLessThan(value);
      expect(high).toBeGreaterThan(value);
      expect(source).not.toBe('');
    }
    expect(() => testTraces(balance, { analytes: ['Cs'] })).toThrow(MissingCoefficientsError);
    expect(testTraces(balance, { analytes: ['Cs'], coefficients: { olivine: { Cs: 0.001 }, plagioclase: { Cs: 0.03 } } }).elements).toHaveLength(1);
    expect(() => testTraces(balance, { analytes: ['Th'] })).toThrow(/do not both have/);
    expect(() => testTraces({} as never)).toThrow(/solved mass balance/);
  });
});

describe('a published pair', () => {
  it('fits in the majors and fails in the isotopes and the heavy rare earths', () => {
    // Salina, Fossa delle Felci: GEOROC compilation, Convergent Margins, doi:10.25625/PVFZCE, CC BY-SA 4.0 (tests/data/models/salina-pair.csv).
    const text = readFileSync(join(__dirname, '../data/models/salina-pair.csv'), 'utf8');
    const [basalt, dacite] = Papa.parse<Record<string, string>>(text, { header: true, skipEmptyLines: true }).data.map((row) =>
      Object.fromEntries(
        Object.entries(row).flatMap(([head, cell]) =>
          /\((wt%|ppm)\)$|^\d+\w+\/\d+\w+$/.test(head) && !head.startsWith('LOI') ? [[head.split(' ')[0], Number(cell)]] : [],
        ),
      ),
    );
    const minerals = {
      plagioclase: { between: ['An45', 'An92'] },
      amphibole: 'magnesiohornblende, Sierra Nevada batholith',
      orthopyroxene: 'Wo3En67Fs30',
      magnetite: 'Usp30',
      apatite: 'fluorapatite Ca5(PO4)3F',
    } as const;
    const balance = massBalance({ parent: basalt, daughter: dacite, minerals });
    expect(balance.probability).toBeGreaterThan(0.05);
    expect(balance.sumOfSquares).toBeLessThan(0.5);
    const test = testTraces(balance);
    expect(test.verdict).toBe('rejected');
    expect(test.ratios.find(({ ratio }) => ratio === '87Sr/86Sr')!.off).toBeGreaterThan(3);
    expect(test.why).toMatch(/not closed/);
  });
});

describe('a published basalt and dacite of one volcano', () => {
  it('fit by the rule of thumb, and not within the errors of the analyses', () => {
    // Ambrym: GEOROC compilation, Convergent Margins, doi:10.25625/PVFZCE, CC BY-SA 4.0 (notebooks/data/ambrym-pair.csv).
    const text = readFileSync(join(__dirname, '../../notebooks/data/ambrym-pair.csv'), 'utf8');
    const [basalt, dacite] = Papa.parse<Record<string, string>>(text, { header: true, skipEmptyLines: true }).data.map((row) =>
      Object.fromEntries(
        Object.entries(row).flatMap(([head, cell]) => (/\((wt%|ppm)\)$/.test(head) && !head.startsWith('LOI') && cell !== '' ? [[head.split(' ')[0], Number(cell)]] : [])),
      ),
    );
    expect(basalt.SiO2).toBeLessThan(52);
    expect(dacite.SiO2).toBeGreaterThan(63);
    const minerals = {
      plagioclase: { between: ['An45', 'An92'] },
      clinopyroxene: 'Wo42En42Fs16',
      olivine: 'Fo70',
      magnetite: 'Usp30',
      apatite: 'fluorapatite Ca5(PO4)3F',
    } as const;
    const balance = massBalance({ parent: basalt, daughter: dacite, minerals });
    // Common practice: ΣR² below 1, better below 0.5, counts as a fit.
    expect(balance.sumOfSquares).toBeLessThan(0.5);
    expect(balance.probability).toBeLessThan(0.01);
    const test = testTraces(balance);
    expect(test.verdict).toBe('rejected');
    expect(test.elements.filter(({ finding }) => finding === 'disagrees').map(({ element }) => element)).toEqual(['Er']);
  });
});

describe('rankAssemblages', () => {
  it('puts the planted assemblage first in most cases, and a phase too many below it', () => {
    const random = seededDraws(80);
    let first = 0;
    const candidates = {
      ...labels,
      orthopyroxene: 'Wo3En67Fs30',
      amphibole: 'pargasite Mg#0.75',
      ilmenite: 'Ilm90',
      apatite: 'fluorapatite Ca5(PO4)3F',
      quartz: 'SiO2',
      garnet: 'Py70Alm17Gr13',
    };
    for (let i = 0; i < 10; i++) {
      const daughter = daughterOf(random);
      const { parent } = plantedParent(daughter, {
        olivine: ['Fo80', 0.08],
        clinopyroxene: ['Wo42En46Fs12', 0.14],
        plagioclase: ['An75', 0.25],
        magnetite: ['Usp30', 0.035],
      });
      const ranking = rankAssemblages({
        parent: noisy(parent, 0.005, random),
        daughter: noisy(daughter, 0.005, random),
        candidates,
        errors: { relative: 0.005, floor: 0.005 },
      });
      expect(ranking.tried).toBe(847); // 10 candidates, 1 to 6 at a time
      if ([...ranking.ranked[0].phases].sort().join() === 'clinopyroxene,magnetite,olivine,plagioclase') first++;
      const weights = ranking.ranked.reduce((sum, { weight }) => sum + weight, 0);
      expect(weights).toBeCloseTo(1, 9);
      const [best] = ranking.ranked;
      const larger = ranking.bestOfSize.find(({ phases }) => phases.length === best.phases.length + 1);
      if (larger !== undefined) expect(larger.aicc).toBeGreaterThanOrEqual(best.aicc);
    }
    expect(first).toBeGreaterThanOrEqual(7);
  });

  it('refuses bad arguments by name', () => {
    const daughter = daughterOf(seededDraws(1));
    const { parent } = plantedParent(daughter, { olivine: ['Fo80', 0.1] });
    const good = { parent, daughter, candidates: { olivine: 'Fo80' } };
    expect(() => rankAssemblages({ ...good, candidates: {} })).toThrow(/1 to 16 phases/);
    expect(() => rankAssemblages({ ...good, errors: 'equal' })).toThrow(/needs errors/);
    expect(() => rankAssemblages({ ...good, most: 0 })).toThrow(/most is 0/);
    expect(() => rankAssemblages({ ...good, criterion: 'r2' as never })).toThrow(/criterion/);
  });
});
