import { richValues } from './rich-value';
import { sessionLink } from './session-link';
import { stockTslabDisplay } from './stock-tslab';

/**
 * Shows a value below the cell, as the last value of a cell is shown: a suite, a report, a diagram, a data frame, or a promise of one.
 * Works in this library's kernel and runner, in a stock tslab kernel, and as plain text in a program.
 *
 * @param value anything; undefined shows nothing
 * @returns a promise to await, so that the next thing shown comes after it
 * @throws what making the picture throws
 * @example await ww.show(ww.suiteOf({ columns: [ww.column({ symbol: 'SiO2', values: [52.1, 60.4] })] }))
 */
export async function show(value: unknown): Promise<void> {
  const values = await richValues(value);
  const link = sessionLink();
  const stock = link === undefined ? stockTslabDisplay() : undefined;
  for (const { data, metadata } of values) {
    if (link !== undefined) link.show({ kind: 'display', data, metadata });
    else if (stock !== undefined) stock({ data, metadata, transient: {} }, false);
    else console.log(String(data['text/plain'] ?? '[no text form]'));
  }
}
