// Tracing: ratios, patterns and anomalies of 100,000 samples; slab shares of 10,000 with 1σ; one inverse fit with 1,000 draws, its progress
// and its interrupt. Answers are checked against the written-out arithmetic before anything is timed.
import { createRequire } from 'node:module';

const require = createRequire(import.meta.url);
const ww = require('../../kernel-lib/dist/index.js');

const elements = ['Cs', 'Rb', 'Ba', 'Th', 'U', 'Nb', 'Ta', 'La', 'Ce', 'Pb', 'Pr', 'Sr', 'Nd', 'Zr', 'Hf', 'Sm', 'Eu', 'Gd', 'Tb', 'Dy', 'Y', 'Ho', 'Er', 'Tm', 'Yb', 'Lu', 'V', 'Sc'];
const morb = ww.referenceComposition('n-morb-1989');

/** Samples scattered round N-MORB by a fixed rule, with some cells below detection; 1σ when asked for. */
function madeSuite(size, { sigma = false } = {}) {
  const noise = (i, e) => Math.exp(Math.sin(i * 12.9898 + e * 78.233) * 0.8);
  const columns = elements.map((symbol, e) => {
    const middle = morb.valueOf(symbol) ?? 40;
    const values = Float64Array.from({ length: size }, (_, i) => middle * noise(i, e));
    const states = new Uint8Array(size);
    const limits = new Float64Array(size).fill(NaN);
    if (symbol === 'Cs' || symbol === 'Ta') {
      for (let i = 0; i < size; i += 50) {
        limits[i] = middle;
        values[i] = NaN;
        states[i] = ww.cellState.belowDetection;
      }
    }
    return ww.column({ symbol, values, states, limits, sigma: sigma ? values.map((value) => 0.03 * value) : undefined });
  });
  for (const [symbol, percent] of [['K2O', 0.1], ['TiO2', 1.2], ['P2O5', 0.12], ['MgO', 7]]) columns.push(ww.column({ symbol, values: new Float64Array(size).fill(percent) }));
  return ww.suiteOf({ columns });
}

let wrong = 0;
function check(what, good) {
  if (good) return;
  wrong++;
  console.error(`WRONG: ${what}`);
}
const near = (a, b) => Math.abs(a / b - 1) < 1e-12;
const time = (run) => {
  const started = performance.now();
  run();
  return (performance.now() - started) / 1000;
};
/** Best of three on fresh suites: nothing is remembered from the run before. */
const bestOf = (make, run) => Math.min(...[0, 1, 2].map(() => {
  const input = make();
  return time(() => run(input));
}));
const report = (name, measured, target) => console.log(`${name}: ${measured.toFixed(3)} s / ${target} s${measured > target ? '  (over)' : ''}`);

const everything = (suite) => ({
  ratios: ww.ratios(suite),
  anomalies: ww.anomalies(suite),
  rare: ww.pattern(suite),
  multi: ww.pattern(suite, { order: 'mantle-incompatibility-1989' }),
});

{
  const suite = madeSuite(1000);
  const { ratios, anomalies, rare, multi } = everything(suite);
  const value = (symbol, i) => suite.values(symbol)[i];
  for (const i of [1, 7, 999]) {
    check('Ba/Th', near(ratios.columns.get('Ba/Th').values[i], value('Ba', i) / value('Th', i)));
    check('(La/Sm)N', near(ratios.columns.get('(La/Sm)N').values[i], value('La', i) / 0.237 / (value('Sm', i) / 0.153)));
    check('Eu/Eu*', near(anomalies.columns.get('Eu/Eu*').values[i], value('Eu', i) / 0.058 / Math.sqrt((value('Sm', i) / 0.153) * (value('Gd', i) / 0.2055))));
    check('Yb pattern', near(rare.normalised[12].values[i], value('Yb', i) / 0.17));
    check('Ba pattern', near(multi.normalised[multi.elements.indexOf('Ba')].values[i], value('Ba', i) / 6.989));
  }
  check('limit of Ta', ratios.columns.get('Nb/Ta').states[0] === ww.cellState.aboveRange);
  report('ratios, anomalies and patterns of 100,000 samples', bestOf(() => madeSuite(100_000), everything), 0.3);
}

{
  const suite = madeSuite(10, { sigma: true });
  const { shares, arrays } = ww.slabShares(suite);
  const { slope, intercept } = arrays.get('Ba');
  const [ba, nb, yb] = ['Ba', 'Nb', 'Yb'].map((symbol) => suite.values(symbol)[3]);
  check('slab share of Ba', near(shares.get('Ba').values[3], 100 * (1 - (10 ** intercept * (nb / yb) ** slope) / (ba / yb))));
  check('1σ of it', shares.get('Ba').sigma[3] > 0);
  report('slab shares of 10,000 samples with 1σ', bestOf(() => madeSuite(10_000, { sigma: true }), (large) => ww.slabShares(large)), 1);
}

{
  const truth = { melt: 0.14, fluid: 0.008, sediment: 0.004, priorMelt: 0.01 };
  const made = ww.fluxedWedgeMelt(truth);
  const suite = ww.suiteOf({ columns: made.elements.map((symbol, e) => ww.column({ symbol, values: [made.melt[e]] })) });
  let steps = 0;
  const fit = await ww.fitFluxedWedge(suite, { draws: 1000, progress: () => steps++ });
  for (const name of ww.wedgeParameterNames) check(`fit of ${name}`, Math.abs(fit.fits[0].parameters[name].value / truth[name] - 1) < 0.01);
  check('progress', steps > 20);
  const times = [];
  for (let k = 0; k < 3; k++) {
    const started = performance.now();
    await ww.fitFluxedWedge(suite, { draws: 1000, progress: () => {} });
    times.push((performance.now() - started) / 1000);
  }
  report('one inverse fit with 1,000 draws and progress', Math.min(...times), 2);
  const stop = new AbortController();
  const running = ww.fitFluxedWedge(suite, { draws: 100_000, signal: stop.signal }).then(() => 'finished', () => 'stopped');
  let asked;
  setTimeout(() => {
    asked = performance.now();
    stop.abort();
  }, 100);
  check('interrupt', (await running) === 'stopped');
  report('from interrupt to stop', (performance.now() - asked) / 1000, 0.2);
}

process.exit(wrong === 0 ? 0 : 1);
