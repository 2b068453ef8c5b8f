import { mkdirSync, mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/** An invented sheet of six lavas, enough for every step of the notebook below. */
export const sheet = `Sample,Volcano,SiO2 (wt%),TiO2 (wt%),Al2O3 (wt%),Fe2O3T (wt%),MnO (wt%),MgO (wt%),CaO (wt%),Na2O (wt%),K2O (wt%),P2O5 (wt%),Ba (ppm),Th (ppm),Rb (ppm),La (ppm),Yb (ppm)
K-1,Ketu,50.4,0.91,17.1,10.2,0.17,7.4,10.9,2.2,0.35,0.11,172,0.13,5.1,2.1,1.6
K-2,Ketu,53.1,1.12,16.4,11.4,0.18,5.0,8.9,2.5,0.45,0.16,231,0.18,6.8,2.8,2.1
K-3,Ketu,57.9,1.25,15.4,10.6,0.19,3.0,7.2,2.8,0.62,0.22,330,<0.05,9.4,4.1,2.9
H-1,Halvo,51.2,0.88,16.9,10.3,0.17,7.1,10.5,2.4,0.85,0.17,205,0.28,12.5,3.2,1.9
H-2,Halvo,56.3,0.93,16.3,8.6,0.16,4.9,8.4,3.1,1.45,0.24,331,0.49,21.7,5.3,2.9
H-3,Halvo,62.8,0.71,15.6,5.9,0.12,2.6,5.6,3.9,2.35,0.31,498,0.83,36.1,8.2,4.0
`;

const cell = (id: string, source: string, tags: string[] = []) => ({ cell_type: 'code', id, metadata: { tags }, outputs: [], execution_count: null, source });

/** A notebook with a figure, tables, printed text and a file of its own. */
export const notebook = JSON.stringify({
  cells: [
    { cell_type: 'markdown', id: 'title', metadata: {}, source: '# Six lavas\n\nInvented for this check.' },
    cell('parameters', "const sheet = 'lavas.csv';\nconst results = 'made';", ['parameters']),
    cell('read', 'const { suite } = await ww.readAssays(sheet);\nsuite'),
    cell('dry', 'const dry = ww.volatileFree(suite);\ndry'),
    cell('names', "const names = ww.classify(dry, ['tas', 'iron-enrichment']);\nnames"),
    cell('ratios', "ww.ratios(dry, ['Ba/Th', 'La/Yb'])"),
    cell('path', "ww.crystallise({ from: suite.sample('K-1'), assemblage: { olivine: 0.3, plagioclase: 0.7 }, analytes: ['Rb', 'La'], downTo: 0.5, steps: 5 })"),
    cell('figure', "ww.diagrams.tas(dry, { group: 'volcano' })"),
    cell('summary', "console.log('done');\nww.runSummary({ 'Rows read': suite.size })"),
  ],
  metadata: {},
  nbformat: 4,
  nbformat_minor: 5,
});

/** A fresh folder with the sheet and the notebook. */
export function madeRun(): { readonly folder: string; readonly notebook: string; readonly sheet: string; readonly out: string } {
  const folder = mkdtempSync(join(tmpdir(), 'wedgework-run-'));
  mkdirSync(join(folder, 'out'));
  const paths = { folder, notebook: join(folder, 'lavas.ipynb'), sheet: join(folder, 'lavas.csv'), out: join(folder, 'out', 'lavas.ipynb') };
  writeFileSync(paths.notebook, notebook);
  writeFileSync(paths.sheet, sheet);
  return paths;
}
