import { findSource, type Source } from './bibliography';

interface CitationJs {
  readonly Cite: new (data: unknown) => { format(kind: 'bibtex'): string };
  readonly plugins: { readonly config: { get(name: string): { format: Record<string, unknown> } } };
}

/** Loaded when first needed: most notebooks never ask for BibTeX. */
function citationJs(): CitationJs {
  const library = require('@citation-js/core') as CitationJs;
  require('@citation-js/plugin-bibtex');
  const { format } = library.plugins.config.get('@bibtex');
  format.useIdAsLabel = true;
  format.checkLabel = false;
  return library;
}

/**
 * Works of the bibliography as BibTeX, one entry a source key, ready for a LaTeX or reference manager.
 *
 * @param keys source keys
 * @throws RangeError for a key that is not in the bibliography
 * @example bibtex(['sun_mcdonough_1989'])
 */
export function bibtex(keys: readonly string[]): string {
  if (keys.length === 0) return '';
  const { Cite } = citationJs();
  // Our own note says which table was used; it is for the project's readers, not for a reference list.
  const works = keys.map((key): Source => ({ ...findSource(key), note: undefined }));
  const written = new Cite(works).format('bibtex');
  // The library leaves TeX's own signs as they are, and writes "et al." as a name.
  return written.replace(/(?<!\\)[&%#]/g, '\\$&').replaceAll('{et al.}', 'others').trim();
}
