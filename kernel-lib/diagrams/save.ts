import { resolve } from 'node:path';
import { writeWhole } from '../display';
import { lineageJson } from '../suite';
import { pageWith, pngWith, svgWith } from './carry-lineage';
import { isDiagram, type Diagram } from './diagram';
import { diagramPage } from './page';
import { renderPdf } from './pdf';

function check(who: string, diagram: Diagram, path: string, ending: string): string {
  if (!isDiagram(diagram)) throw new TypeError(`${who}: the first argument must be a diagram, e.g. diagrams.tas(suite).`);
  if (typeof path !== 'string' || path.trim() === '')
    throw new RangeError(`${who}: the second argument must be a file path, e.g. "figures/tas${ending}".`);
  if (!path.toLowerCase().endsWith(ending)) throw new RangeError(`${who}: the path must end in ${ending}, not "${path}".`);
  return resolve(path);
}

/**
 * Writes a diagram as SVG, with its lineage in the file's metadata (as all saved figures carry it). Text stays text, in the family Source Sans 3 with common sans-serif faces behind it.
 *
 * @param path file path ending in .svg, relative to the notebook; folders are made, a file of that name is replaced whole
 * @throws TypeError or RangeError for a wrong argument; the system's own error when the file cannot be written
 * @example await diagrams.saveSvg(diagrams.tas(suite), 'figures/tas.svg')
 */
export async function saveSvg(diagram: Diagram, path: string): Promise<void> {
  const file = check('saveSvg', diagram, path, '.svg');
  writeWhole(file, svgWith(await diagram.svg(), lineageJson(diagram.lineage)));
}

/**
 * Writes a diagram as PNG.
 *
 * @param path file path ending in .png
 * @param options `scale`: pixels to one of the page (default 4: some 300 dots an inch at 18 cm width)
 * @throws TypeError or RangeError for a wrong argument; the system's own error when the file cannot be written
 * @example await diagrams.savePng(diagrams.tas(suite), 'figures/tas.png')
 */
export async function savePng(diagram: Diagram, path: string, options: { readonly scale?: number } = {}): Promise<void> {
  const file = check('savePng', diagram, path, '.png');
  writeWhole(file, pngWith(await diagram.png({ scale: options.scale ?? 4 }), lineageJson(diagram.lineage)));
}

/**
 * Writes a diagram as PDF: vectors, with the font embedded.
 *
 * @param path file path ending in .pdf
 * @throws TypeError or RangeError for a wrong argument; the system's own error when the file cannot be written
 * @example await diagrams.savePdf(diagrams.tas(suite), 'figures/tas.pdf')
 */
export async function savePdf(diagram: Diagram, path: string): Promise<void> {
  const file = check('savePdf', diagram, path, '.pdf');
  writeWhole(file, await renderPdf(await diagram.svg(), diagram.description, lineageJson(diagram.lineage)));
}

/**
 * Writes a diagram as one HTML file that needs no network: the picture, and over it the live diagram (hover, zoom, legend filter) where
 * the browser runs scripts.
 *
 * @param path file path ending in .html
 * @throws TypeError or RangeError for a wrong argument; the system's own error when the file cannot be written
 * @example await diagrams.saveHtml(diagrams.tas(suite), 'figures/tas.html')
 */
export async function saveHtml(diagram: Diagram, path: string): Promise<void> {
  const file = check('saveHtml', diagram, path, '.html');
  writeWhole(file, pageWith(diagramPage(diagram, await diagram.svg()), lineageJson(diagram.lineage)));
}
