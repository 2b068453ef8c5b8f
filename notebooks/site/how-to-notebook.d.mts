/** A how-to page as a notebook: its texts as Markdown cells, its `ts` blocks as code cells. */
export function howToNotebook(page: string): string;
