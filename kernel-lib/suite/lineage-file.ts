import { writeWhole } from '../display';
import type { Step } from './lineage';
import { libraryVersion } from './sources';

/** @internal A lineage as it travels inside an exported file: the library's version and the steps, as JSON. The same steps give the same text. */
export function lineageJson(lineage: readonly Step[]): string {
  return JSON.stringify({ wedgework: libraryVersion(), steps: lineage });
}

/**
 * @internal Writes a lineage beside an exported file whose format has no room for it: `results.csv` gets `results.csv.lineage.json`.
 */
export function writeLineageBeside(path: string, lineage: readonly Step[]): void {
  writeWhole(`${path}.lineage.json`, `${JSON.stringify({ wedgework: libraryVersion(), steps: lineage }, null, 1)}\n`);
}
