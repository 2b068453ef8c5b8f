import { existsSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';

let folder: string | undefined;

/** The folder reference-tables/, found by walking up from this file: the same way from the sources, the build and an installed package. */
export function referenceFolder(): string {
  if (folder !== undefined) return folder;
  for (let at = __dirname; ; at = dirname(at)) {
    const candidate = join(at, 'reference-tables');
    if (existsSync(join(candidate, 'atomic-weights.csv'))) return (folder = candidate);
    if (dirname(at) === at) {
      throw new Error('The folder reference-tables/ was not found beside the library. Reinstall wedgework, or build it again in a full clone.');
    }
  }
}

/** @internal Folder of the installed library: the one with its package.json. */
export function libraryFolder(): string {
  for (let at = __dirname; ; at = dirname(at)) {
    const file = join(at, 'package.json');
    if (existsSync(file) && (JSON.parse(readFileSync(file, 'utf8')) as { name?: string }).name === 'wedgework') return at;
    if (dirname(at) === at) throw new Error('The package.json of wedgework was not found above its own files. Install the library again.');
  }
}
