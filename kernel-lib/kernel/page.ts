import { escapeHtml } from '../display';
import { pageStyle } from './page-style';

/** A page that needs nothing else and does nothing by itself, whatever its body holds: no script runs and nothing is fetched. */
export function selfContainedPage(title: string, body: readonly string[]): string {
  return [
    '<!DOCTYPE html>',
    '<html lang="en">',
    '<head>',
    '<meta charset="utf-8">',
    '<meta name="viewport" content="width=device-width, initial-scale=1">',
    `<meta http-equiv="Content-Security-Policy" content="default-src 'none'; img-src data:; style-src 'unsafe-inline'">`,
    `<title>${escapeHtml(title)}</title>`,
    `<style>${pageStyle}</style>`,
    '</head>',
    '<body>',
    '<main>',
    ...body,
    '</main>',
    '</body>',
    '</html>',
    '',
  ].join('\n');
}

/** Markdown made HTML, with the HTML in it shown as text. */
export function markdownRenderer(): (text: string) => string {
  // Loaded here, so that a notebook that imports the library does not load a page's tools.
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const MarkdownIt = require('markdown-it') as typeof import('markdown-it');
  const markdown = new MarkdownIt({ html: false, linkify: false, typographer: false });
  return (text) => markdown.render(text);
}
