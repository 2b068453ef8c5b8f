#!/usr/bin/env node
// Draws every diagram at several data windows and group counts, for eyes: node tests/diagrams/gallery.mjs [part of a name]
// Needs a build (npm run build). The pictures go to .artifacts/gallery/, which git ignores.
import { mkdirSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { createRequire } from 'node:module';

const root = dirname(dirname(dirname(fileURLToPath(import.meta.url))));
const ww = createRequire(import.meta.url)(join(root, 'kernel-lib', 'dist', 'index.js'));
const { figures } = await import('./gallery-figures.mjs');
const out = join(root, '.artifacts', 'gallery');
mkdirSync(out, { recursive: true });
const wanted = process.argv[2] ?? '';
for (const [name, draw] of Object.entries(figures(ww))) {
  if (!name.includes(wanted)) continue;
  try {
    const started = performance.now();
    const diagram = await draw();
    const png = await diagram.png();
    writeFileSync(join(out, `${name}.png`), png);
    const warnings = ww.diagrams.specWarnings?.(diagram.spec) ?? [];
    console.log(`${name}: ${Math.round(performance.now() - started)} ms, spec ${Math.round(JSON.stringify(diagram.spec).length / 1000)} kB, PNG ${Math.round(png.length / 1000)} kB${warnings.length ? ` WARNINGS ${warnings.join(' | ')}` : ''}`);
  } catch (error) {
    console.error(`${name}: ${error.stack}`);
    process.exitCode = 1;
  }
}
