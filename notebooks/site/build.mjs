#!/usr/bin/env node
// npm run docs: the static site in .artifacts/site/. Gallery notebooks and how-to pages are run, so that what they show is what the
// library does today; the API comes from the doc comments; schemes and reference tables come from reference-tables/ itself.
import { execFileSync } from 'node:child_process';
import { copyFileSync, mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { basename, dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import MarkdownIt from 'markdown-it';
import Papa from 'papaparse';
import { howToNotebook } from './how-to-notebook.mjs';

const here = dirname(fileURLToPath(import.meta.url));
const root = join(here, '..', '..');
const site = join(root, '.artifacts', 'site');
const ww = createRequire(import.meta.url)('../../kernel-lib/dist/index.js');
const markdown = new MarkdownIt({ html: false });
const escape = ww.escapeHtml;

rmSync(site, { recursive: true, force: true });
mkdirSync(join(site, 'gallery'), { recursive: true });
mkdirSync(join(site, 'how-to'), { recursive: true });

/** Runs a notebook from its own folder and writes it as a page. A page that fails stops the build: documentation that is wrong is worse than none. */
async function page(notebook, target, scratch) {
  const run = await ww.runNotebook(notebook, { html: target, folder: join(root, 'notebooks'), scratch });
  if (run.status !== 'ok') throw new Error(`${basename(notebook)}: code cell ${run.failures[0]?.cell}: ${run.failures[0]?.ename}: ${run.failures[0]?.evalue}`);
  console.log(`  ${basename(target)} (${run.seconds.toFixed(1)} s)`);
  const heading = run.notebook.cells.find(({ type }) => type === 'markdown')?.source.match(/^#\s+(.+)$/m)?.[1];
  return { file: basename(target), title: heading ?? basename(target, '.html') };
}

const scratch = join(root, '.artifacts', 'site-scratch');
mkdirSync(scratch, { recursive: true });
console.log('Gallery');
const gallery = [];
for (const file of readdirSync(join(root, 'notebooks')).filter((name) => name.endsWith('.ipynb')).sort()) {
  gallery.push(await page(join(root, 'notebooks', file), join(site, 'gallery', file.replace('.ipynb', '.html')), scratch));
}
console.log('How-to pages');
const howTo = [];
for (const file of readdirSync(join(root, 'notebooks', 'how-to')).sort()) {
  const notebook = join(scratch, file.replace('.md', '.ipynb'));
  writeFileSync(notebook, howToNotebook(readFileSync(join(root, 'notebooks', 'how-to', file), 'utf8')));
  howTo.push(await page(notebook, join(site, 'how-to', file.replace('.md', '.html')), scratch));
}
rmSync(scratch, { recursive: true, force: true });

console.log('API');
execFileSync(process.execPath, [join(root, 'node_modules', 'typedoc', 'bin', 'typedoc'), '--options', join(here, 'typedoc.json'), '--out', join(site, 'api')], { cwd: root, stdio: ['ignore', 'ignore', 'inherit'] });

const style = readFileSync(join(here, 'site.css'), 'utf8');
const shell = (title, body, up = '') =>
  `<!DOCTYPE html>\n<html lang="en">\n<head>\n<meta charset="utf-8">\n<meta name="viewport" content="width=device-width, initial-scale=1">\n<title>${escape(title)}</title>\n<style>${style}</style>\n</head>\n<body>\n<header><a href="${up}index.html">wedgework</a></header>\n<main>\n<h1>${escape(title)}</h1>\n${body}\n</main>\n</body>\n</html>\n`;
const table = (heads, rows) =>
  `<table><thead><tr>${heads.map((head) => `<th scope="col">${escape(head)}</th>`).join('')}</tr></thead><tbody>\n${rows.map((row) => `<tr>${row.map((cell) => `<td>${escape(String(cell ?? ''))}</td>`).join('')}</tr>`).join('\n')}\n</tbody></table>`;

console.log('Schemes and tables');
const { schemes } = ww.schemes.list();
writeFileSync(join(site, 'schemes.html'), shell('Classification schemes', `<p>Each is one file in reference-tables/schemes/. "From memory" means that nobody has yet checked the geometry against its source.</p>\n${table(
  ['key', 'title', 'kind', 'basis', 'standing', 'limits of use', 'sources'],
  schemes.map((scheme) => [scheme.key, scheme.title, scheme.kind, scheme.basis, scheme.standing, scheme.limits.join(' '), scheme.sources.map((key) => (ww.bibliography().has(key) ? ww.shortSource(key) : key)).join('; ')]),
)}`));

const folder = ww.referenceFolder();
const standings = readdirSync(folder, { recursive: true }).map(String).filter((file) => file.endsWith('.csv')).sort().map((file) => {
  const { data, meta } = Papa.parse(readFileSync(join(folder, file), 'utf8'), { header: true, skipEmptyLines: true });
  const count = (standing) => data.filter((row) => row.standing === standing).length;
  const sources = new Set(data.map((row) => row.source).filter(Boolean));
  return [file, data.length, (meta.fields ?? []).join(', '), count('verified'), count('checked once'), count('computed'), count('from memory'), sources.size];
});
writeFileSync(join(site, 'tables.html'), shell('Reference tables', `<p>Every published number that the library relies on, with how far it has been checked.</p>\n${table(
  ['table', 'rows', 'columns', 'verified', 'checked once', 'computed', 'from memory', 'sources'], standings)}\n<h2>Bibliography</h2>\n<ul>\n${[...ww.bibliography().keys()].sort().map((key) => `<li>${escape(ww.formatSource(key))}</li>`).join('\n')}\n</ul>`));

const links = (folderName, pages) => `<ul>\n${pages.map(({ file, title }) => `<li><a href="${folderName}/${file}">${escape(title)}</a></li>`).join('\n')}\n</ul>`;
const readme = readFileSync(join(root, 'README.md'), 'utf8');
const job = readme.slice(readme.indexOf('**The job.**')).split('\n\n')[0];
writeFileSync(join(site, 'index.html'), shell('wedgework', `${markdown.render(job)}\n<h2>Gallery</h2>\n${links('gallery', gallery)}\n<h2>How to …</h2>\n${links('how-to', howTo)}\n<h2>Reference</h2>\n<ul>\n<li><a href="api/index.html">Functions and types</a></li>\n<li><a href="schemes.html">Classification schemes</a></li>\n<li><a href="tables.html">Reference tables and bibliography</a></li>\n</ul>`));
copyFileSync(join(root, 'LICENSE'), join(site, 'LICENSE.txt'));
console.log(`Site: ${join('.artifacts', 'site', 'index.html')}`);
