import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { z } from 'zod';
import { referenceFolder } from './locate';
import { once, readJsonTable, ReferenceTableError } from './read';

/** One work of the bibliography, in CSL-JSON (the citation standard); `id` is the source key that tables and schemes carry. */
export interface Source {
  readonly id: string;
  readonly type: string;
  readonly title: string;
  readonly author?: readonly { readonly family?: string; readonly given?: string; readonly literal?: string }[];
  readonly issued?: { readonly 'date-parts': readonly (readonly number[])[] };
  readonly 'container-title'?: string;
  readonly publisher?: string;
  readonly volume?: string;
  readonly page?: string;
  readonly DOI?: string;
  readonly note?: string;
}

const sourceSchema = z.strictObject({
  id: z.string().regex(/^[a-z0-9][a-z0-9_-]*$/, 'a source key is lower case letters, digits, _ and -'),
  type: z.string(),
  title: z.string(),
  author: z.array(z.strictObject({ family: z.string().optional(), given: z.string().optional(), literal: z.string().optional() })).optional(),
  issued: z.strictObject({ 'date-parts': z.array(z.array(z.number())) }).optional(),
  'container-title': z.string().optional(),
  publisher: z.string().optional(),
  volume: z.string().optional(),
  page: z.string().optional(),
  DOI: z.string().optional(),
  note: z.string().optional(),
});

const all = once((): ReadonlyMap<string, Source> => {
  const sources = new Map<string, Source>();
  for (const file of readdirSync(join(referenceFolder(), 'bibliography')).sort()) {
    if (!file.endsWith('.json')) continue;
    for (const source of readJsonTable(`bibliography/${file}`, z.array(sourceSchema))) {
      if (sources.has(source.id)) throw new ReferenceTableError(`bibliography/${file}: the source key "${source.id}" is used twice.`);
      sources.set(source.id, source);
    }
  }
  return sources;
});

/** Every work of the bibliography, by source key. */
export function bibliography(): ReadonlyMap<string, Source> {
  return all();
}

/**
 * The work behind a source key.
 *
 * @throws RangeError for a key that is not in reference-tables/bibliography/
 */
export function findSource(key: string): Source {
  const source = all().get(key);
  if (source === undefined) throw new RangeError(`The source key "${key}" is not in reference-tables/bibliography/. Add the work there, in CSL-JSON.`);
  return source;
}

/**
 * A reference as text: authors (year) title, journal volume: pages, doi.
 *
 * @example formatSource('sun_mcdonough_1989') // 'Sun S.-s., McDonough W.F. (1989) Chemical and isotopic …'
 */
export function formatSource(key: string): string {
  const { author = [], issued, title, volume, page, DOI, publisher, 'container-title': container } = findSource(key);
  const names = author.map(({ family, given, literal }) => literal ?? [family, given].filter(Boolean).join(' ')).join(', ');
  const year = issued?.['date-parts'][0]?.[0];
  const place = [container ?? publisher, volume].filter(Boolean).join(' ') + (page === undefined ? '' : `: ${page}`);
  return [`${names}${year === undefined ? '' : ` (${year})`} ${title}`.trim(), place, DOI === undefined ? '' : `doi:${DOI}`].filter((text) => text !== '').join(', ');
}

/** A reference in short: `Sun & McDonough 1989`, `Gale et al. 2013`. */
export function shortSource(key: string): string {
  const { author = [], issued, title } = findSource(key);
  const names = author.map(({ family, literal }) => family ?? literal ?? '').filter((name) => name !== '' && name !== 'et al.');
  const more = names.length > 2 || author.some(({ literal }) => literal === 'et al.');
  const who = names.length === 0 ? title : more ? `${names[0]} et al.` : names.join(' & ');
  const year = issued?.['date-parts'][0]?.[0];
  return year === undefined ? who : `${who} ${year}`;
}
