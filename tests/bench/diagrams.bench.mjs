// Redrawing a diagram: TAS of 1,000 samples from suite to PNG, as a re-run cell does it. The answers are checked first.
import { createRequire } from 'node:module';
import { madeSuite } from '../diagrams/made-suite.mjs';

const ww = createRequire(import.meta.url)('../../kernel-lib/dist/index.js');
const median = (times) => [...times].sort((a, b) => a - b)[Math.floor(times.length / 2)];

/** A fresh suite each time: nothing may be remembered from the last drawing. */
const suites = Array.from({ length: 12 }, (_, seed) => madeSuite(ww, { samples: 1000, groups: 5, seed: seed + 1 }));
const first = ww.diagrams.tas(suites[0], { group: 'volcano' });
const png = await first.png();
if (first.counts.plotted + first.counts.notPlotted !== 1000 || first.counts.plotted < 900 || png.length < 50_000) {
  console.error('The TAS diagram of 1,000 samples is not what it should be.');
  process.exit(1);
}

async function time(draw) {
  const times = [];
  for (const suite of suites.slice(1)) {
    const started = performance.now();
    await draw(suite);
    times.push(performance.now() - started);
  }
  return median(times);
}

const report = (name, measured, target) => console.log(`${name}: ${measured.toFixed(0)} ms / ${target} ms`);
report('TAS of 1,000 samples, suite to PNG', await time(async (suite) => (await ww.diagrams.tas(suite, { group: 'volcano' }).toMimeBundle())['image/png']), 250);
report('TAS of 1,000 samples, specification alone', await time(async (suite) => ww.diagrams.tas(suite, { group: 'volcano' }).spec), 60);
report('Harker panels of 1,000 samples, suite to PNG', await time(async (suite) => ww.diagrams.harker(suite, { group: 'volcano' }).png()), 1000);
