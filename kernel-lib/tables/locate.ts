import { existsSync } from 'node:fs';
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
