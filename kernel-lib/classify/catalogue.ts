import { readdirSync } from 'node:fs';
import { isAbsolute, join, resolve } from 'node:path';
import { showAs, type Showable } from '../display';
import { bibliography, once, referenceFolder, ReferenceTableError, shortSource } from '../tables';
import { schemeNeeds } from './needs';
import type { Scheme } from './scheme';
import { readScheme } from './scheme-file';

/** Keys of the built-in schemes: the file of a scheme is named after its key. */
const builtInKeys = once((): readonly string[] =>
  readdirSync(join(referenceFolder(), 'schemes'))
    .filter((file) => file.endsWith('.json'))
    .map((file) => file.slice(0, -'.json'.length))
    .sort(),
);

const builtIn = new Map<string, Scheme>();

/** A built-in scheme, read when it is first asked for. */
function readBuiltIn(key: string): Scheme {
  let scheme = builtIn.get(key);
  if (scheme === undefined) {
    scheme = readScheme(`schemes/${key}.json`);
    if (scheme.key !== key)
      throw new ReferenceTableError(`schemes/${key}.json: the file of scheme "${scheme.key}" must be named ${scheme.key}.json.`);
    builtIn.set(key, scheme);
  }
  return scheme;
}

const loaded = new Map<string, Scheme>();

/**
 * A scheme by its key: one of reference-tables/schemes/, or one that `schemes.load` brought in.
 *
 * @throws RangeError listing the keys there are
 * @example findScheme('tas').fields.map((field) => field.symbol)
 */
export function findScheme(key: string): Scheme {
  const own = loaded.get(key);
  if (own !== undefined) return own;
  if (!builtInKeys().includes(key))
    throw new RangeError(`There is no scheme "${String(key)}". Known: ${[...builtInKeys(), ...loaded.keys()].join(', ')}.`);
  return readBuiltIn(key);
}

function allSchemes(): readonly Scheme[] {
  return [...builtInKeys().map(readBuiltIn), ...loaded.values()];
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
      scheme.key,
      scheme.title,
      scheme.kind,
      schemeNeeds(scheme).join(', '),
      scheme.basis,
      scheme.sources.map(sourceText).join('; '),
      scheme.standingNote === '' ? scheme.standing : `${scheme.standing}: ${scheme.standingNote}`,
      scheme.limits.join(' '),
    ]),
  }));
}

function load(path: string): Scheme {
  if (typeof path !== 'string' || path.trim() === '')
    throw new RangeError('schemes.load takes the path of a scheme file (JSON), e.g. schemes.load("my-scheme.json").');
  const scheme = readScheme(isAbsolute(path) ? path : resolve(path), { absolute: true });
  if (builtInKeys().includes(scheme.key)) throw new RangeError(`${path}: the key "${scheme.key}" is taken by a built-in scheme; choose another.`);
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
