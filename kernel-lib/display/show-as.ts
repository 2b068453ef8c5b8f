import { inspect } from 'node:util';
import { jupyterDisplay, type MimeBundle, type Showable } from './mime';
import { tableBundle, type TableView } from './table';

/**
 * Gives a plain result the means to show itself in a notebook, without making it a class: the methods are hidden properties, so the
 * result stays plain data for everything else.
 *
 * @param result any object; changed in place and returned
 * @param view makes the table (or the finished bundle) when it is asked for
 * @returns the same object, now with `toMimeBundle()`
 */
export function showAs<Result extends object>(result: Result, view: (result: Result) => TableView | MimeBundle): Result & Showable {
  const bundle = (): MimeBundle => {
    const made = view(result);
    return isTableView(made) ? tableBundle(made) : made;
  };
  Object.defineProperties(result, {
    toMimeBundle: { value: bundle, enumerable: false },
    [jupyterDisplay]: { value: bundle, enumerable: false },
    [inspect.custom]: { value: () => String(bundle()['text/plain'] ?? ''), enumerable: false },
  });
  return result as Result & Showable;
}

function isTableView(made: TableView | MimeBundle): made is TableView {
  return Array.isArray((made as TableView).columns) && Array.isArray((made as TableView).rows);
}
