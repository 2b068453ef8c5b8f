import { readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';

/** Folder of the installed library: the one with its package.json. */
export function libraryFolder(): string {
  for (let at = __dirname; ; at = dirname(at)) {
    try {
      if ((JSON.parse(readFileSync(join(at, 'package.json'), 'utf8')) as { name?: string }).name === 'wedgework') return at;
    } catch {
      // Not at this height: the sources and the build lie at different ones.
    }
    if (dirname(at) === at) throw new Error('The package.json of wedgework was not found above its own files. Install the library again.');
  }
}

export function libraryVersion(): string {
  return (JSON.parse(readFileSync(join(libraryFolder(), 'package.json'), 'utf8')) as { version: string }).version;
}
