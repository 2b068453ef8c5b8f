// Classification: names and all series of 100,000 samples; norms; probabilities of 10,000 samples in the 15 fields of TAS. Answers are
// checked first: fields against an even-odd rule, norms against their sum, probabilities against drawing.
import { createRequire } from 'node:module';

const require = createRequire(import.meta.url);
const ww = require('../../kernel-lib/dist/index.js');

const spans = {
  SiO2: [45, 30],
  TiO2: [0.2, 1.2],
  Al2O3: [14, 4],
  FeOT: [3, 8],
  MnO: [0.05, 0.1],
  MgO: [1, 8],
  CaO: [3, 8],
  Na2O: [2, 3],
  K2O: [0.2, 4],
  P2O5: [0.05, 0.3],
  Zr: [30, 150],
  Y: [8, 25],
  La: [3, 25],
  Yb: [0.8, 3],
  Th: [0.2, 5],
  Nb: [0.5, 10],
};

/** A suite of samples strewn over the usual range of arc lavas; the same numbers every time. */
function madeSuite(size, sigma = false) {
  let state = 1;
  const uniform = () => (state = (state * 16807) % 2147483647) / 2147483647;
  const values = Object.fromEntries(Object.keys(spans).map((symbol) => [symbol, new Float64Array(size)]));
  for (let i = 0; i < size; i++) for (const [symbol, [from, span]] of Object.entries(spans)) values[symbol][i] = from + span * uniform();
  return ww.suiteOf({
    columns: Object.entries(values).map(([symbol, each]) =>
      ww.column({ symbol, values: each, ...(sigma ? { sigma: each.map((value) => (symbol === 'SiO2' ? 0.5 : 0.03 * value)) } : {}) }),
    ),
  });
}

let wrong = 0;
const check = (what, right) => {
  if (right) return;
  wrong++;
  console.error(`WRONG: ${what}`);
};

function evenOdd(vertices, x, y) {
  let inside = false;
  for (let i = 0, j = vertices.length - 1; i < vertices.length; j = i++) {
    const [[xi, yi], [xj, yj]] = [vertices[i], vertices[j]];
    if (yi > y !== yj > y && x < ((xj - xi) * (y - yi)) / (yj - yi) + xi) inside = !inside;
  }
  return inside;
}

const series = ['tas', 'potassium-silica', 'potassium-silica-1976', 'iron-enrichment', 'afm', 'alkalinity'];
const small = madeSuite(5000);
const asked = ww.verdictOf(ww.classify(small, series), 'tas');
check(
  'TAS fields agree with an even-odd rule',
  asked.scheme.fields.every(({ vertices }, k) =>
    asked.field.every((field, i) => (field === k) === evenOdd(vertices, asked.x.values[i], asked.y.values[i])),
  ),
);
const norms = ww.norm(small);
check(
  'norms sum to 100',
  small.samples.every(
    (_, i) =>
      norms.reasons[i] !== '' ||
      Math.abs(ww.normMinerals.reduce((sum, mineral) => sum + norms.weights[mineral].values[i], norms.remainder[i]) - 100) < 1e-9,
  ),
);
check(
  'every sample is named',
  ww.nameRocks(small).names.every((name) => name !== ''),
);
const few = madeSuite(40, true);
const [analytic, drawn] = ['analytic', 'sampled'].map(
  (probability) => ww.verdictOf(ww.classify(few, 'tas', { probability, draws: 4000 }), 'tas').probability,
);
check(
  'probabilities agree with drawing',
  analytic.values.every((share, k) => share.every((value, i) => Math.abs(value - drawn.values[k][i]) < 0.04)),
);

/** Best of some runs, each on a suite of its own, so that nothing is remembered. */
function time(name, target, make, run, runs = 4) {
  let best = Infinity;
  for (let r = 0; r < runs; r++) {
    const suite = make();
    const start = performance.now();
    run(suite);
    best = Math.min(best, performance.now() - start);
  }
  console.log(`${name}: ${(best / 1000).toFixed(3)} s / ${target}`);
}

const large = () => madeSuite(100_000);
time('names and all series, 100,000 samples', 'under 0.3 s', large, (suite) => {
  ww.nameRocks(suite);
  ww.classify(suite, series.slice(2));
});
time('TAS fields and distances, 100,000 samples', 'tens of ms', large, (suite) => ww.classify(suite, 'tas'));
time('CIPW norm, 100,000 samples', 'no target', large, (suite) => ww.norm(suite));
time(
  'probabilities, 10,000 samples × 15 fields',
  'under 1 s',
  () => madeSuite(10_000, true),
  (suite) => ww.classify(suite, 'tas'),
);
time('consensus with reasons, 100,000 samples', 'no target', large, (suite) => ww.consensus(suite), 2);
if (wrong > 0) process.exit(1);
