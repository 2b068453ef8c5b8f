// Handing over: a report on 1,000 samples as page, PDF and workbook; and what recording and verifying add to a run.
import { mkdtempSync, readFileSync, rmSync, statSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const here = dirname(fileURLToPath(import.meta.url));
const ww = createRequire(import.meta.url)('../../kernel-lib/dist/index.js');
const notebooks = join(here, '..', '..', 'notebooks');
const folder = mkdtempSync(join(tmpdir(), 'handover-'));
let wrong = 0;
const check = (holds, what) => {
  if (!holds) {
    console.error(`WRONG: ${what}`);
    wrong++;
  }
};
const seconds = async (work) => {
  const start = performance.now();
  await work();
  return (performance.now() - start) / 1000;
};

try {
  const { suite } = ww.audit((await ww.readAssays(join(notebooks, 'data', 'oruvai-arc.xlsx'))).suite);
  const many = suite.rows(Int32Array.from({ length: 1000 }, (_, i) => i % suite.size));
  const reportTime = await seconds(async () => {
    const made = await ww.report({
      title: 'A thousand samples',
      figures: [ww.diagrams.tas(many, { group: 'volcano' }), ww.diagrams.harker(many, { group: 'volcano' })],
      tables: { Analyses: many, Reading: ww.consensus(many) },
    });
    for (const ending of ['html', 'pdf', 'xlsx']) await ww.saveReport(made, join(folder, `report.${ending}`));
  });
  for (const ending of ['html', 'pdf', 'xlsx']) check(statSync(join(folder, `report.${ending}`)).size > 20_000, `the ${ending} report is empty`);
  console.log(`report on 1,000 samples, three files: ${reportTime.toFixed(2)} s / target 10 s`);

  const notebook = join(notebooks, '01-named-suite.ipynb');
  const out = join(folder, 'run', 'suite.ipynb');
  await ww.runNotebook(notebook, { scratch: folder });
  const bare = await seconds(() => ww.runNotebook(notebook, { out, scratch: folder, record: false }));
  const recorded = await seconds(() => ww.runNotebook(notebook, { out, scratch: folder }));
  check(JSON.parse(readFileSync(out.replace('.ipynb', '.record.json'), 'utf8')).cells.length > 10, 'the record names no cells');
  let result;
  const verified = await seconds(async () => void (result = await ww.verifyRun(out)));
  check(result.verdict === 'identical', `verified as ${result.verdict}`);
  console.log(`a run ${bare.toFixed(2)} s; with its record ${recorded.toFixed(2)} s; verified in ${verified.toFixed(2)} s: ${(100 * (verified / bare - 1)).toFixed(0)} % more than the run / target 10 %`);
} finally {
  rmSync(folder, { recursive: true, force: true });
}
process.exit(wrong === 0 ? 0 : 1);
