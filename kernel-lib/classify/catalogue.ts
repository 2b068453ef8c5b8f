import { readdirSync } from 'node:fs';
import { isAbsolute, join, resolve } from 'node:path';
import { showAs, type Showable } from '../display';
import { bibliography, once, referenceFolder, ReferenceTableError, shortSource } from '../tables';
import { schemeNeeds } from './needs';
import type { Scheme } from './scheme';
import { readScheme } from './scheme-file';

const builtIn = once((): ReadonlyMap<string, Scheme> => {
  const found = new Map<string, Scheme>();
  for (const file of readdirSync(join(referenceFolder(), 'schemes')).sort()) {
    if (!file.endsWith('.json')) continue;
    const scheme = readScheme(`schemes/${file}`);
    if (`${scheme.key}.json` !== file) throw new ReferenceTableError(`schemes/${file}: the file of scheme "${scheme.key}" must be named ${scheme.key}.json.`);
    found.set(scheme.key, scheme);
  }
  return found;
});

const loaded = new Map<string, Scheme>();

/**
 * A scheme by its key: one of reference-tables/schemes/, or one that `schemes.load` brought in.
 *
 * @throws RangeError listing the keys there are
 * @example findScheme('tas').fields.map((field) => field.symbol)
 */
export function findScheme(key: string): Scheme {
  const found = loaded.get(key) ?? builtIn().get(key);
  if (found === undefined) throw new RangeError(`There is no scheme "${key}". Known: ${allSchemes().map((scheme) => scheme.key).join(', ')}.`);
  return found;
}

function allSchemes(): readonly Scheme[] {
  return [...builtIn().values(), ...loaded.values()];
}

/** A source as a reader wants it: short where the bibliography has it, as written where an own scheme cites something else. */
export function sourceText(key: string): string {
  return bibliography().has(key) ? shortSource(key) : key;
}

/** The list of schemes, as plain values that show as a table. */
export interface SchemeList extends Showable {
  readonly schemes: readonly Scheme[];
}

function list(): SchemeList {
  return showAs({ schemes: allSchemes() }, (made) => ({
    title: 'Schemes',
    columns: ['key', 'title', 'kind', 'needs', 'basis', 'source', 'geometry', 'limits of use'],
    rows: made.schemes.map((scheme) => [
      scheme.key, scheme.title, scheme.kind, schemeNeeds(scheme).join(', '), scheme.basis, scheme.sources.map(sourceText).join('; '),
      scheme.standingNote === '' ? scheme.standing : `${scheme.standing}: ${scheme.standingNote}`, scheme.limits.join(' '),
    ]),
  }));
}

function load(path: string): Scheme {
  if (typeof path !== 'string' || path.trim() === '') throw new RangeError('schemes.load takes the path of a scheme file (JSON), e.g. schemes.load("my-scheme.json").');
  const scheme = readScheme(isAbsolute(path) ? path : resolve(path), { absolute: true });
  if (builtIn().has(scheme.key)) throw new RangeError(`${path}: the key "${scheme.key}" is taken by a built-in scheme; choose another.`);
  loaded.set(scheme.key, scheme);
  return scheme;
}

/**
 * The schemes there are. `list()` shows every one with its source, what it needs, limits of use and the standing of its geometry;
 * `load(path)` brings in a scheme file of your own (path relative to the notebook) and returns it: from then on it is asked, drawn and
 * sampled like any other; `find(key)` gives one.
 *
 * @example schemes.list()
 */
export const schemes: {
  readonly list: () => SchemeList;
  readonly load: (path: string) => Scheme;
  readonly find: (key: string) => Scheme;
} = { list, load, find: findScheme };
