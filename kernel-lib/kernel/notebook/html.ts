import { stripVTControlCharacters } from 'node:util';
import { escapeHtml } from '../../display';
import { outputText, type Notebook, type NotebookCell, type NotebookOutput } from './document';
import { pngSize } from '../rich-value';
import { markdownRenderer, selfContainedPage } from '../page';

/** Options of `notebookHtml`. */
export interface HtmlOptions {
  /** Title of the page where the notebook has no heading of its own. */
  readonly title?: string;
}

/**
 * A notebook as one HTML page that needs nothing else: pictures inside, no script, every text escaped. HTML that a cell showed is kept
 * only as far as tables and plain text marks go; the HTML of markdown cells is shown as text.
 *
 * @param notebook with its outputs
 * @returns the page
 * @example const page = ww.notebookHtml((await ww.runNotebook('analysis.ipynb')).notebook)
 */
export function notebookHtml(notebook: Notebook, options: HtmlOptions = {}): string {
  // Loaded here, so that a notebook that imports the library does not load a page's tools.
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const sanitize = require('sanitize-html') as typeof import('sanitize-html');
  const markdown = markdownRenderer();
  const heading = firstHeading(notebook);
  const title = heading ?? options.title ?? 'Notebook';
  const cells = notebook.cells.map((cell) => cellHtml(cell, markdown, (html) => sanitize(html, allowed))).filter((html) => html !== '');
  return selfContainedPage(title, heading === undefined ? [`<h1>${escapeHtml(title)}</h1>`, ...cells] : cells);
}

const allowed = {
  allowedTags: [
    ...['table', 'caption', 'thead', 'tbody', 'tfoot', 'tr', 'th', 'td', 'colgroup', 'col'],
    ...['p', 'div', 'span', 'br', 'hr', 'b', 'strong', 'i', 'em', 'u', 'code', 'pre', 'sub', 'sup', 'small', 'ul', 'ol', 'li', 'dl', 'dt', 'dd', 'a', 'details', 'summary'],
  ],
  allowedAttributes: { th: ['scope', 'colspan', 'rowspan', 'align'], td: ['colspan', 'rowspan', 'align'], a: ['href'], table: ['border'] },
  allowedSchemes: ['http', 'https', 'mailto'],
};

function firstHeading(notebook: Notebook): string | undefined {
  for (const cell of notebook.cells) {
    const match = cell.type === 'markdown' ? /^#\s+(.+)$/m.exec(cell.source) : null;
    if (match !== null) return match[1].replace(/[*_`]/g, '').trim();
  }
  return undefined;
}

type Render = (text: string) => string;

function cellHtml(cell: NotebookCell, markdown: Render, clean: Render): string {
  if (cell.type === 'markdown') return `<section class="text">\n${markdown(cell.source)}</section>`;
  if (cell.type === 'raw' || (cell.source.trim() === '' && cell.outputs.length === 0)) return '';
  const count = cell.executionCount === null ? '' : `<span class="count" aria-hidden="true">[${cell.executionCount}]</span>`;
  const outputs = cell.outputs.map((output) => outputHtml(output, markdown, clean)).filter((html) => html !== '');
  return [
    `<section class="cell" id="cell-${escapeHtml(cell.id)}">`,
    `<div class="code">${count}<pre><code>${escapeHtml(cell.source)}</code></pre></div>`,
    ...outputs,
    '</section>',
  ].join('\n');
}

function outputHtml(output: NotebookOutput, markdown: Render, clean: Render): string {
  if (output.output_type === 'stream') {
    const text = stripVTControlCharacters(outputText(output.text) ?? '');
    return text.trim() === '' ? '' : `<pre class="stream${output.name === 'stderr' ? ' aside' : ''}">${escapeHtml(text)}</pre>`;
  }
  if (output.output_type === 'error') {
    const trace = Array.isArray(output.traceback) && output.traceback.length > 0 ? output.traceback : [`${String(output.ename)}: ${String(output.evalue)}`];
    return `<pre class="error">${escapeHtml(stripVTControlCharacters(trace.map(String).join('\n')))}</pre>`;
  }
  const data = (output.data ?? {}) as Record<string, unknown>;
  const text = outputText(data['text/plain']) ?? '';
  for (const type of ['image/png', 'image/jpeg', 'image/svg+xml']) {
    const picture = outputText(data[type]);
    if (picture === undefined) continue;
    const base64 = type === 'image/svg+xml' ? Buffer.from(picture).toString('base64') : picture.replace(/\s/g, '');
    if (!/^[A-Za-z0-9+/]+=*$/.test(base64)) continue;
    return pictureHtml(`data:${type};base64,${base64}`, text, pictureWidth(output, type, base64));
  }
  const html = outputText(data['text/html']);
  if (html !== undefined) {
    // A wide table scrolls inside its own frame, which the keyboard can reach.
    return `<div class="shown" tabindex="0" role="group" aria-label="Shown table">${clean(html)}</div>`;
  }
  const marked = outputText(data['text/markdown']);
  if (marked !== undefined) return `<div class="shown">${markdown(marked)}</div>`;
  return text === '' ? '' : `<pre class="value">${escapeHtml(stripVTControlCharacters(text))}</pre>`;
}

function pictureHtml(address: string, text: string, width: number | undefined): string {
  const described = text.trim() === '' ? 'Figure' : text.trim();
  return `<figure><img src="${address}" alt="${escapeHtml(described.slice(0, 500))}"${width === undefined ? '' : ` width="${width}"`}></figure>`;
}

/** The width to draw at: what the output says, or the picture's own. */
function pictureWidth(output: NotebookOutput, type: string, base64: string): number | undefined {
  const metadata = output.metadata as Record<string, { width?: unknown } | undefined> | undefined;
  const width = metadata?.[type]?.width;
  if (typeof width === 'number') return width;
  return type === 'image/png' ? pngSize(base64)?.width : undefined;
}
