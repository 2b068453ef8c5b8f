// The main job on 100,000 analyses: read, recast, classify, tracers, write. Answers are held against the same job scripted by hand with
// pandas (baseline.py) column by column, where Python with pandas is present; then both are timed, with peak memory.
import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const here = dirname(fileURLToPath(import.meta.url));
const require = createRequire(import.meta.url);
const rows = Number(process.env.SPINE_ROWS ?? 100_000);

if (process.argv[2] === 'job') {
  await job(process.argv[3], process.argv[4]);
  process.exit(0);
}

/** Our side of the job, in a process of its own so that its peak memory is its own. */
async function job(sheet, target) {
  const loading = performance.now();
  const ww = require('../../kernel-lib/dist/index.js');
  const clock = [performance.now()];
  const lap = () => clock.push(performance.now());
  const { suite } = await ww.readAssays(sheet);
  lap();
  const dry = ww.withMagnesiumNumber(ww.volatileFree(suite));
  lap();
  const verdicts = ww.classify(dry, ['tas', 'potassium-silica', 'iron-enrichment', 'afm', 'alkalinity']);
  lap();
  const names = ['Ba/Th', 'Ba/La', 'Ba/Nb', 'Ce/Pb', 'U/Th', 'Sr/Nd', 'Sr/Y', 'Th/Yb', 'Nb/Yb', 'Th/Nb', 'Th/La', 'La/Sm', 'La/Yb', 'Nb/Ta', 'Zr/Nb', 'Zr/Hf', 'Zr/Y', 'Cs/Rb', 'V/Sc', 'Dy/Yb'];
  const rare = ['La', 'Ce', 'Pr', 'Nd', 'Sm', 'Eu', 'Gd', 'Tb', 'Dy', 'Ho', 'Er', 'Tm', 'Yb', 'Lu'];
  const ratios = ww.ratios(suite, [...names, ...rare.map((el) => `(${el})N`), 'Eu/Eu*', '(La/Yb)N'], { reference: 'chondrite-c1-1989' });
  lap();
  await writeResults(ww, target, dry, verdicts, ratios);
  lap();
  const stages = Object.fromEntries(['read', 'recast', 'classify', 'tracers', 'write'].map((stage, i) => [stage, (clock[i + 1] - clock[i]) / 1000]));
  console.log(JSON.stringify({ ...stages, load: (clock[0] - loading) / 1000, total: (clock.at(-1) - clock[0]) / 1000, peak: process.resourceUsage().maxRSS / 1024 }));
}

/** The results as the yardstick writes them, for the comparison column by column. */
async function writeResults(ww, target, dry, verdicts, ratios) {
  const names = (scheme, map = (name) => name) => verdicts.schemes.get(scheme).names.map(map);
  const labels = {
    Sample: dry.samples,
    TAS: verdicts.schemes.get('tas').symbols,
    Potassium: names('potassium-silica'),
    IronEnrichment: names('iron-enrichment', (name) => (name.startsWith('calc-alkal') ? 'calc-alkaline' : name.split(' ')[0])),
    AFM: names('afm', (name) => name || 'outside'),
    Alkalinity: names('alkalinity'),
  };
  const named = ([name, { values }]) => ({ name: name.replace(/^\((\w+)\)N$/, '$1_N'), values });
  await ww.writeTable(target, [{ name: 'Total', values: dry.values('SumAsGiven') }, { name: 'MgNumber', values: dry.values('Mg-number') }, ...[...ratios.columns].map(named)], labels);
}

const folder = mkdtempSync(join(tmpdir(), 'spine-'));
let wrong = 0;
try {
  const sheet = join(folder, 'assays.csv');
  const run = (command, args) => {
    const { status, stdout, stderr } = spawnSync(command, args, { encoding: 'utf8', maxBuffer: 1 << 26 });
    if (status !== 0) throw new Error(`${command} ${args[0]} failed:\n${stderr}`);
    return stdout;
  };
  run(process.execPath, [join(here, 'make-assays.mjs'), String(rows), sheet]);

  const ours = JSON.parse(run(process.execPath, [join(here, 'spine.bench.mjs'), 'job', sheet, join(folder, 'ours.csv')]));
  console.log(`ours: ${Object.entries(ours).map(([stage, value]) => `${stage} ${value.toFixed(2)}${stage === 'peak' ? ' MB' : ' s'}`).join(', ')}`);

  const python = process.env.PYTHON ?? 'python3';
  const present = spawnSync(python, ['-c', 'import pandas, numpy']).status === 0;
  if (!present) console.log('Python with pandas is not here (set PYTHON to one that has it), so there is nothing to compare with.');
  else {
    const wrapper = 'import resource, runpy, sys; sys.argv = sys.argv[1:]; runpy.run_path(sys.argv[0], run_name="__main__"); print(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024)';
    const out = run(python, ['-c', wrapper, join(here, 'baseline.py'), sheet, join(folder, 'theirs.csv')]).trim().split('\n');
    const total = Number(/'total': ([\d.]+)/.exec(out[0])[1]);
    const peak = Number(out.at(-1));
    console.log(`pandas: ${out[0]}, peak ${peak.toFixed(0)} MB`);
    wrong = compare(join(folder, 'ours.csv'), join(folder, 'theirs.csv'));
    console.log(`time: ${(total / ours.total).toFixed(1)} times faster / target 3; memory: ${(ours.peak / peak).toFixed(2)} of theirs / target 1`);
  }
} finally {
  rmSync(folder, { recursive: true, force: true });
}
process.exit(wrong === 0 ? 0 : 1);

/** Columns of two results tables, compared: texts to the letter, numbers to six digits. @returns the number of cells that differ */
function compare(oursPath, theirsPath) {
  const read = (path) => readFileSync(path, 'utf8').trim().split('\n').map((line) => line.split(','));
  const [ours, theirs] = [read(oursPath), read(theirsPath)];
  if (ours.length !== theirs.length) throw new Error(`${ours.length} rows, where the yardstick has ${theirs.length}.`);
  let differing = 0;
  let cells = 0;
  for (const [j, name] of theirs[0].entries()) {
    const k = ours[0].indexOf(name);
    if (k < 0) throw new Error(`The column ${name} is missing. There are: ${ours[0].join(', ')}.`);
    let here = 0;
    for (let i = 1; i < theirs.length; i++) {
      const [a, b] = [ours[i][k], theirs[i][j]];
      cells++;
      if (a === b) continue;
      const [x, y] = [Number(a || 'x'), Number(b || 'x')];
      // The yardstick uses a rounded FeO/Fe2O3 factor and molar masses; both print six digits.
      if (!(Math.abs(x - y) <= 1.01e-5 * Math.abs(y))) here++;
    }
    if (here > 0) console.log(`  ${name}: ${here} of ${theirs.length - 1} differ, e.g. row ${1 + theirs.slice(1).findIndex((row, i) => row[j] !== ours[i + 1][k])}`);
    differing += here;
  }
  console.log(`answers: ${cells} cells compared, ${differing} differ`);
  return differing;
}
