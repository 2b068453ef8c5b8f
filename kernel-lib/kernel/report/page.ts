import { escapeHtml } from '../../display';
import { markdownRenderer, selfContainedPage } from '../page';
import type { Block } from './blocks';

/** The report as one HTML page that needs nothing else: pictures inside, no script, every text escaped. */
export function reportPage(title: string, blocks: readonly Block[]): string {
  const markdown = markdownRenderer();
  return selfContainedPage(title, [`<h1>${escapeHtml(title)}</h1>`, ...blocks.map((block) => blockHtml(block, markdown))]);
}

function blockHtml(block: Block, markdown: (text: string) => string): string {
  switch (block.kind) {
    case 'heading':
      return `<h${block.level}>${escapeHtml(block.text)}</h${block.level}>`;
    case 'text':
      // Headings inside a text stand below the report's own.
      return markdown(block.markdown.replace(/^#{1,6}\s+/gm, '### '));
    case 'printed':
      return `<pre class="stream">${escapeHtml(block.text)}</pre>`;
    case 'figure':
      return `<figure><img src="data:image/png;base64,${block.png}" width="${block.width}" height="${block.height}" alt="${escapeHtml(block.described.slice(0, 500))}"></figure>`;
    case 'table': {
      const head = block.columns.map((text) => `<th scope="col">${text === '' ? '<span aria-hidden="true">#</span>' : escapeHtml(text)}</th>`).join('');
      const rows = block.rows.map((cells) => `<tr>${cells.map((text) => `<td${isNumeric(text) ? ' align="right"' : ''}>${escapeHtml(text)}</td>`).join('')}</tr>`).join('\n');
      const caption = block.title === '' ? '' : `<caption>${escapeHtml(block.title)}</caption>`;
      // A wide table scrolls inside its own frame, which the keyboard can reach.
      const frame = `<div class="shown" tabindex="0" role="group" aria-label="${escapeHtml(block.title || 'Table')}">`;
      return `${frame}<table>${caption}<thead><tr>${head}</tr></thead><tbody>\n${rows}\n</tbody></table></div>${block.notes.map((note) => `<p>${escapeHtml(note)}</p>`).join('')}`;
    }
  }
}

export const isNumeric = (text: string): boolean => /^[-+<>]?\d[\d.,]*([eE][-+]?\d+)?%?$/.test(text);
