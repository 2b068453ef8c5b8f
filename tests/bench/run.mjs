#!/usr/bin/env node
// npm run bench: every *.bench.mjs beside this file, one process each. A script checks its answers, then times; it exits 1 only if an
// answer is wrong, because times depend on the machine. `npm run bench -- assay models` runs only those.
import { spawnSync } from 'node:child_process';
import { readdirSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const here = dirname(fileURLToPath(import.meta.url));
const wanted = process.argv.slice(2);
const scripts = readdirSync(here).filter((file) => file.endsWith('.bench.mjs') && (wanted.length === 0 || wanted.includes(file.replace('.bench.mjs', '')))).sort();
let failed = 0;
for (const script of scripts) {
  console.log(`\n── ${script.replace('.bench.mjs', '')} ──`);
  const { status } = spawnSync(process.execPath, ['--expose-gc', join(here, script)], { stdio: 'inherit' });
  if (status !== 0) failed++;
}
if (failed > 0) {
  console.error(`\n${failed} of ${scripts.length} benchmarks gave a wrong answer.`);
  process.exit(1);
}
