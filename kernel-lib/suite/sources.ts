import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { showAs, type Showable, type TableCell } from '../display';
import { bibtex, findSource, formatSource, libraryFolder, once, referenceVersions, shortSource, type Source } from '../tables';
import type { Step, StepDetail, Traced } from './lineage';

/** A result, a suite, or several of them together: whatever carries a lineage. */
export type Results = Traced | readonly Traced[];

/** The steps that made a result, in order, to read or to file. */
export interface LineageList extends Showable {
  readonly steps: readonly Step[];
  /** The version of this library that is running. */
  readonly version: string;
}

/** What a result rests on, ready for a reference list. */
export interface SourceList extends Showable {
  /** Source keys, each once, in order of first use. */
  readonly keys: readonly string[];
  /** One formatted reference a key. */
  readonly references: readonly string[];
  readonly bibtex: string;
  /** CSL-JSON, the citation standard that reference managers read. */
  readonly csl: readonly Source[];
  /** Tables of reference-tables/ used, with the SHA-256 of each as it was read. */
  readonly tables: readonly { readonly table: string; readonly sha256: string }[];
  /** What ran, with its version. */
  readonly software: readonly { readonly name: string; readonly version: string }[];
  /** A methods paragraph in plain words, parameters filled in. */
  readonly methods: string;
  /** Published values used that have not been checked against their source: check them before relying on the result. */
  readonly fromMemory: readonly string[];
}

function steps(of: Results, caller: string): readonly Step[] {
  const all: readonly Partial<Traced>[] = Array.isArray(of) ? of : [of];
  const untraced = all.findIndex((each) => typeof each !== 'object' || each === null || !Array.isArray(each.lineage));
  if (all.length === 0 || untraced >= 0) {
    const got = all.length === 0 ? 'an empty list' : String(all[untraced]);
    throw new TypeError(`${caller} takes a suite or a result of this library (something with a lineage), or a list of them; it got ${got}.`);
  }
  return [...new Set(all.flatMap(({ lineage = [] }) => lineage))];
}

interface PackageFile {
  readonly version: string;
  readonly dependencies: Readonly<Record<string, string>>;
}

const packageFile = once(() => JSON.parse(readFileSync(join(libraryFolder(), 'package.json'), 'utf8')) as PackageFile);

/** The version of this library, e.g. `0.1.0`. */
export function libraryVersion(): string {
  return packageFile().version;
}

/** The packages that this library pins, with their exact versions. */
export function packageVersions(): Readonly<Record<string, string>> {
  return packageFile().dependencies;
}

function detailText(detail: StepDetail): string {
  if (Array.isArray(detail)) return detail.length > 12 ? `${detail.slice(0, 12).map(detailText).join(', ')} … (${detail.length})` : detail.map(detailText).join(', ');
  if (typeof detail === 'object' && detail !== null) return Object.entries(detail).map(([name, value]) => `${name} ${detailText(value)}`).join(', ');
  return String(detail);
}

/**
 * The steps that made a result, as a readable list: what was done, with which parameters, by which published method.
 *
 * @param of a suite, any result of this library, or a list of them (a step that they share stands once)
 * @returns `steps` in order; shown as a table
 * @throws TypeError for something without a lineage
 * @example lineage(volatileFree(suite))
 */
export function lineage(of: Results): LineageList {
  const list = steps(of, 'lineage');
  return showAs({ steps: list, version: libraryVersion() }, ({ version }) => ({
    title: `Lineage: ${list.length} step${list.length === 1 ? '' : 's'}, wedgework ${version}`,
    columns: ['', 'step', 'with', 'sources'],
    rows: list.map((each, i): TableCell[] => [
      i + 1,
      each.what,
      Object.entries(each.detail).map(([name, value]) => `${name}: ${detailText(value)}`).join('; '),
      each.sources.map(shortSource).join('; '),
    ]),
  }));
}

/**
 * What a result rests on: exactly the references behind it as text, BibTeX and CSL-JSON; the tables and software used; a methods
 * paragraph with the parameters filled in; and the values that an author should check, because they were not seen in their source.
 *
 * @param of a suite, any result of this library, or a list of them
 * @throws TypeError for something without a lineage
 * @example sources([names, path]).bibtex
 */
export function sources(of: Results): SourceList {
  const list = steps(of, 'sources');
  const distinct = (texts: readonly string[]) => [...new Set(texts)];
  const keys = distinct(list.flatMap((each) => each.sources));
  const versions = referenceVersions();
  const says = distinct(list.map((each) => each.says).filter((text) => text !== ''));
  const closing = `Calculations were made with wedgework ${libraryVersion()}${keys.length === 0 ? '' : `, after ${keys.map(shortSource).join('; ')}`}.`;
  const result = {
    keys,
    references: keys.map(formatSource),
    bibtex: bibtex(keys),
    csl: keys.map(findSource),
    tables: distinct(list.flatMap((each) => each.tables)).map((table) => ({ table, sha256: versions.get(table) ?? '' })),
    software: [{ name: 'wedgework', version: libraryVersion() }, { name: 'Node.js', version: process.versions.node }],
    methods: [...says, closing].join(' '),
    fromMemory: distinct(list.flatMap((each) => each.fromMemory)),
  };
  return showAs(result, ({ references, fromMemory, methods }) => ({
    title: `${references.length} source${references.length === 1 ? '' : 's'} behind this result`,
    columns: ['key', 'reference'],
    rows: references.map((text, i): TableCell[] => [keys[i], text]),
    notes: [`Methods: ${methods}`, ...(fromMemory.length === 0 ? [] : [`From memory, to be checked against the source: ${fromMemory.join('; ')}.`])],
  }));
}
