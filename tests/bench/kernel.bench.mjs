// How long a user waits: from starting a notebook to its first diagram, and for a cell that draws a diagram again. Runs the engine as
// the kernel and the runner do.
import assert from 'node:assert/strict';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';

const require = createRequire(import.meta.url);
const { EngineProcess } = require('../../kernel-lib/dist/kernel/engine/engine-process.js');

const suiteCell = (n) => `
const n = ${n};
const wave = (low: number, high: number, k: number) => Float64Array.from({ length: n }, (_, i) => low + (high - low) * ((i * k) % n) / n);
const suite = ww.suiteOf({
  columns: [['SiO2', 48, 70, 1], ['TiO2', 1.4, 0.4, 1], ['Al2O3', 15, 18, 23], ['FeOT', 10, 4, 13], ['MgO', 8, 1, 1], ['CaO', 11, 3, 1], ['Na2O', 2, 4.5, 7], ['K2O', 0.3, 2.8, 11]]
    .map(([symbol, low, high, k]) => ww.column({ symbol: String(symbol), values: wave(Number(low), Number(high), Number(k)) })),
  labels: { sample: Array.from({ length: n }, (_, i) => 'KE-' + (i + 1)), volcano: Array.from({ length: n }, (_, i) => ['Ketu', 'Marrin', 'Halvo'][i % 3]) },
});`;
const drawCell = "ww.diagrams.tas(suite, { group: 'volcano' })";

async function session(n) {
  const start = performance.now();
  const engine = new EngineProcess({ folder: tmpdir(), preload: true, quiet: true });
  const run = async (code) => {
    const began = performance.now();
    const shown = [];
    const reply = await engine.execute({ code, label: 'cell' }, (output) => 'data' in output && shown.push(output.data));
    assert.equal(reply.status, 'ok', `${reply.ename}: ${reply.evalue}`);
    return { shown, took: performance.now() - began };
  };
  await engine.ready;
  const ready = performance.now() - start;
  await run(suiteCell(n));
  const first = await run(drawCell);
  const toFirst = performance.now() - start;
  // The answer first: a picture, and the samples in its specification.
  const [data] = first.shown;
  assert.equal(Buffer.from(data['image/png'], 'base64').toString('latin1', 1, 4), 'PNG');
  assert.ok(JSON.stringify(data['application/vnd.vegalite.v5+json']).includes(`KE-${n}`), 'every sample is in the specification');
  const again = [];
  for (let i = 0; i < 12; i++) again.push((await run(drawCell)).took);
  const plain = [];
  for (let i = 0; i < 12; i++) plain.push((await run('suite.size')).took);
  await engine.end();
  const middle = (times) => times.slice(2).sort((a, b) => a - b)[5];
  return { ready, toFirst, again: middle(again), plain: middle(plain) };
}

const small = await session(60);
const large = await session(1000);
const line = (name, value, target) => console.log(`${name}: ${value.toFixed(0)} ms${target === undefined ? '' : ` / at most ${target} ms`}`);
line('kernel ready, library loaded', small.ready);
line('start to first diagram (60 samples)', small.toFirst, 3000);
line('start to first diagram (1,000 samples)', large.toFirst, 3000);
line('TAS of 1,000 samples again', large.again, 250);
line('a cell that does next to nothing', large.plain);
