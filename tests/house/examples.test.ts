import { cpSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join, relative } from 'node:path';
import ts from 'typescript';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { built } from '../kernel/engine';
import { notebook, sheet } from '../kernel/made-run';

// Every @example of a doc comment is run: it is what the kernel shows on hover, so it must work as it stands.
const ww = createRequire(__filename)(join(built, 'index.js')) as typeof import('../../kernel-lib');
const library = join(__dirname, '../../kernel-lib');
const notebooks = join(__dirname, '../../notebooks');

interface Example {
  readonly where: string;
  readonly code: string;
}

function sources(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    if (['dist', 'node_modules', 'assets'].includes(entry.name)) return [];
    const path = join(folder, entry.name);
    return entry.isDirectory() ? sources(path) : entry.name.endsWith('.ts') ? [path] : [];
  });
}

/** The examples of declarations that a notebook can reach; those of a room's insides (@internal) are for its readers. */
function examples(): Example[] {
  return sources(library).flatMap((path) => {
    const found: Example[] = [];
    const visit = (node: ts.Node): void => {
      const tags = ts.getJSDocTags(node).filter((tag) => tag.parent.parent === node);
      if (!tags.some((tag) => tag.tagName.text === 'internal')) {
        for (const tag of tags) {
          if (tag.tagName.text !== 'example') continue;
          found.push({ where: `${relative(library, path)}: ${(node as { name?: { getText(): string } }).name?.getText() ?? ''}`, code: ts.getTextOfJSDocComment(tag.comment) ?? '' });
        }
      }
      ts.forEachChild(node, visit);
    };
    visit(ts.createSourceFile(path, readFileSync(path, 'utf8'), ts.ScriptTarget.ES2022, true));
    return found;
  });
}

const folder = mkdtempSync(join(tmpdir(), 'wedgework-examples-'));
const before = process.cwd();
let known: Record<string, unknown>;

/** What an example may take as given: the names that our doc comments use for a suite, a slab, a path … */
beforeAll(async () => {
  mkdirSync(join(folder, 'notebooks', 'data'), { recursive: true });
  mkdirSync(join(folder, 'sheets'));
  cpSync(join(notebooks, 'data'), join(folder, 'notebooks', 'data'), { recursive: true });
  cpSync(join(notebooks, 'data'), join(folder, 'data'), { recursive: true });
  cpSync(join(notebooks, 'data', 'oruvai-arc.xlsx'), join(folder, 'my-island.xlsx'));
  cpSync(join(__dirname, '../data/margin/slab-depth-contours.csv'), join(folder, 'data', 'slab-depths.csv'));
  writeFileSync(join(folder, 'analysis.ipynb'), notebook);
  writeFileSync(join(folder, 'lavas.csv'), sheet);
  writeFileSync(join(folder, 'sheets', 'lavas.csv'), sheet);
  process.chdir(folder);
  const assays = await ww.readAssays('data/oruvai-arc.xlsx');
  const checked = ww.audit(assays.suite);
  const { suite } = checked;
  const dry = ww.volatileFree(suite);
  const [parent, daughter] = [suite.rows([suite.samples.indexOf('KE-20')]), suite.rows([suite.samples.indexOf('KE-10')])];
  const minerals = { olivine: 'Fo80', clinopyroxene: 'Wo42En46Fs12', plagioclase: 'An75' } as const;
  const balance = ww.massBalance({ parent, daughter, minerals });
  const path = ww.crystallise({ from: parent, assemblage: { olivine: 0.2, clinopyroxene: 0.3, plagioclase: 0.5 }, analytes: ['La', 'Sm', 'Yb', 'Sr', 'Y'], downTo: 0.4 });
  const quakes = await ww.readHypocentres('data/oruvai-hypocentres.csv');
  const slab = ww.slabFromHypocentres(quakes, { area: { west: -132, east: -127, south: -46, north: -43 } });
  const placed = ww.slabBelow(slab, suite);
  const fertile = await ww.readAssays('data/oruvai-intrusions.csv');
  const groupLabel = [...fertile.suite.labels.keys()].find((name) => /intrusion/i.test(name))!;
  const screen = ww.screenFertility(ww.audit(fertile.suite).suite, { group: groupLabel });
  const fit = await ww.fitFluxedWedge(suite.where({ volcano: 'Ketu', SiO2: { to: 53 } }), { group: 'volcano', draws: 50 });
  const names = ww.classify(dry, ['tas']);
  const made = await ww.report({ title: 'Made', tables: { Names: names } });
  await ww.runNotebook('analysis.ipynb', { out: 'results/oruvai-arc/01-named-suite.ipynb' });
  const wholeRock = ww.wholeRockPath({
    from: parent, assemblage: { olivine: 0.2, clinopyroxene: 0.3, plagioclase: 0.5 }, downTo: 0.6, compositions: minerals, analytes: ['Sr', 'Ba'], meltType: 'basalt',
  });
  known = { ...ww, ...ww.diagrams, ww, assays, checked, suite, dry, parent, daughter, minerals, balance, path, quakes, slab, placed, screen, fit, names, made, wholeRock, diagrams: ww.diagrams };
}, 180_000);

afterAll(() => {
  process.chdir(before);
  rmSync(folder, { recursive: true, force: true });
});

describe('the example of', () => {
  const all = examples();
  it('most public functions is there', () => expect(all.length).toBeGreaterThan(120));

  it.each(all)('$where runs', async ({ code }) => {
    const plain = ts.transpileModule(code, { compilerOptions: { target: ts.ScriptTarget.ES2022, module: ts.ModuleKind.ESNext } }).outputText;
    // The names are in scope as in a notebook: own declarations of the example win over them.
    const run = new Function('scope', `with (scope) { return (async () => {\n${plain}\n})(); }`) as (scope: unknown) => Promise<unknown>;
    await expect(run(known).then(() => 'ran', (error: Error) => `${error.name}: ${error.message}`)).resolves.toBe('ran');
  }, 60_000);
});
