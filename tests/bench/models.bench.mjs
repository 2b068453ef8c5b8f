// Speed of the models room: answers are checked first, then timed. Run `npm run build` before it.
import { createRequire } from 'node:module';
const ww = createRequire(import.meta.url)('../../kernel-lib/dist/index.js');

let wrong = 0;
const check = (what, ok) => {
  if (!ok) {
    wrong++;
    console.error(`WRONG ANSWER: ${what}`);
  }
};
const best = (times, work) => {
  let least = Infinity;
  for (let i = 0; i < times; i++) {
    const from = performance.now();
    work();
    least = Math.min(least, performance.now() - from);
  }
  return least;
};
const report = (name, measured, target) =>
  console.log(`${name}: ${measured.toFixed(1)} ms / target ${target} ms${measured > target ? '  (slower)' : ''}`);

const oxides = ['SiO2', 'TiO2', 'Al2O3', 'FeOT', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'];
const daughter = { SiO2: 62.8, TiO2: 1.04, Al2O3: 15.6, FeOT: 8.39, MnO: 0.19, MgO: 1.75, CaO: 4.79, Na2O: 4.69, K2O: 1.33, P2O5: 0.2 };
const labels = {
  plagioclase: 'An75',
  clinopyroxene: 'Wo42En46Fs12',
  olivine: 'Fo80',
  magnetite: 'Usp30',
  orthopyroxene: 'Wo3En67Fs30',
  amphibole: 'pargasite Mg#0.75',
};
const planted = { plagioclase: 0.26, clinopyroxene: 0.1, olivine: 0.04, magnetite: 0.05, orthopyroxene: 0, amphibole: 0 };
const iron = 71.844 / (159.687 / 2);
const composition = (mineral) => {
  const raw = ww.solidSolution(mineral, labels[mineral]) ?? ww.mineralComposition(mineral, labels[mineral]).oxides;
  const one = Object.fromEntries(
    oxides.map((oxide) => [oxide, oxide === 'FeOT' ? (raw.get('FeO') ?? 0) + iron * (raw.get('Fe2O3') ?? 0) : (raw.get(oxide) ?? 0)]),
  );
  const sum = Object.values(one).reduce((total, value) => total + value, 0);
  return Object.fromEntries(Object.entries(one).map(([oxide, value]) => [oxide, (100 * value) / sum]));
};
const total = Object.values(daughter).reduce((sum, value) => sum + value, 0);
const parent = Object.fromEntries(
  oxides.map((oxide) => [
    oxide,
    (0.55 * 100 * daughter[oxide]) / total + Object.keys(labels).reduce((sum, mineral) => sum + planted[mineral] * composition(mineral)[oxide], 0),
  ]),
);

// 1,000 mass balances of 10 oxides × 6 phases
const one = ww.massBalance({ parent, daughter, minerals: labels, draws: 0 });
check('mass balance recovers the planted F', Math.abs(one.F.value - 0.55) < 1e-3);
for (const { phase, value } of one.phases) check(`mass balance recovers ${phase}`, Math.abs(value - planted[phase]) < 2e-3);
report(
  '1,000 mass balances (10 oxides × 6 phases)',
  best(3, () => ww.massBalance({ parent, daughter, minerals: labels, draws: 1000 })),
  1000,
);
report(
  '1,000 mass balances, each read and checked from its arguments',
  best(2, () => {
    for (let i = 0; i < 1000; i++) ww.massBalance({ parent, daughter, minerals: labels, draws: 0 });
  }),
  1000,
);

// All subsets of 10 candidates, up to 6 at a time
const candidates = { ...labels, ilmenite: 'Ilm90', apatite: 'fluorapatite Ca5(PO4)3F', quartz: 'SiO2', garnet: 'Py70Alm17Gr13' };
const ranking = ww.rankAssemblages({ parent, daughter, candidates });
check('847 subsets are tried', ranking.tried === 847);
check('the planted assemblage is first', [...ranking.ranked[0].phases].sort().join() === 'clinopyroxene,magnetite,olivine,plagioclase');
report(
  'all subsets of 10 candidate phases',
  best(3, () => ww.rankAssemblages({ parent, daughter, candidates })),
  1000,
);

// A whole-rock path of 100 steps × 40 analytes: 10 oxides and 30 elements
const elements = 'Rb Sr Ba Zr Y Nb Hf Ta Th U Pb La Ce Pr Nd Sm Eu Gd Tb Dy Ho Er Tm Yb Lu V Cr Ni Co Sc'.split(' ');
const from = { ...parent, ...Object.fromEntries(elements.map((symbol, i) => [symbol, 10 + i])) };
const coefficients = Object.fromEntries(
  ['olivine', 'clinopyroxene', 'plagioclase', 'magnetite'].map((mineral, m) => [
    mineral,
    Object.fromEntries(elements.map((symbol, i) => [symbol, 0.05 * (m + 1) + 0.02 * i])),
  ]),
);
const options = {
  from,
  assemblage: { olivine: 0.1, clinopyroxene: 0.25, plagioclase: 0.55, magnetite: 0.1 },
  compositions: { ...labels, olivine: 'exchange' },
  downTo: 0.6,
  coefficients,
  steps: 100,
  conditions: { temperature: 'olivine-liquid', pressure: 2000, water: 2, redox: { buffer: 'NNO' } },
};
const path = ww.wholeRockPath(options);
check('the path has 100 steps and 40 analytes', path.F.length === 101 && [...oxides, ...elements].every((symbol) => path.liquid.has(symbol)));
check('the path conserves mass', Math.abs(0.6 * path.liquid.values('Sr')[100] + 0.4 * path.cumulate.values('Sr')[100] - from.Sr) < 1e-9);
report(
  'whole-rock path, 100 steps × 40 analytes, exchange and properties',
  best(8, () => ww.wholeRockPath(options)),
  20,
);

process.exitCode = wrong > 0 ? 1 : 0;
