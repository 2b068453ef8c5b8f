/**
 * A how-to page as a notebook: its texts as Markdown cells, its ```ts blocks as code cells that are run one after the other.
 *
 * @param {string} page the Markdown of the page
 * @returns {string} the text of a notebook file
 */
export function howToNotebook(page) {
  const parts = page.split(/^```ts\n([\s\S]*?)^```\n/m);
  const cells = parts
    .map((text, i) => ({ code: i % 2 === 1, text: text.trim() }))
    .filter(({ text }) => text !== '')
    .map(({ code, text }, i) => ({
      cell_type: code ? 'code' : 'markdown',
      id: `part-${i + 1}`,
      metadata: {},
      ...(code ? { execution_count: null, outputs: [] } : {}),
      source: text,
    }));
  return JSON.stringify({ cells, metadata: {}, nbformat: 4, nbformat_minor: 5 });
}
