import { inputsRead, libraryVersion, packageVersions, type InputFile, type Step } from '../../suite';
import { referenceVersions } from '../../tables';
import { shownSteps } from './shown-steps';

/** What the process of a run knows about itself when its last cell is done. */
export interface RunFacts {
  readonly inputs: readonly InputFile[];
  /** SHA-256 of every reference table read, by its path inside reference-tables/. */
  readonly tables: Readonly<Record<string, string>>;
  readonly versions: { readonly wedgework: string; readonly node: string; readonly platform: string; readonly packages: Readonly<Record<string, string>> };
  /** Steps behind everything that was shown. */
  readonly lineage: readonly Step[];
}

export function runFacts(): RunFacts {
  return {
    inputs: inputsRead(),
    tables: Object.fromEntries([...referenceVersions()].sort(([a], [b]) => (a < b ? -1 : 1))),
    versions: { wedgework: libraryVersion(), node: process.versions.node, platform: `${process.platform} ${process.arch}`, packages: installedPackages() },
    lineage: shownSteps(),
  };
}

/** The versions that are installed, which need not be those that were asked for. */
function installedPackages(): Record<string, string> {
  const versions: Record<string, string> = {};
  for (const [name, pinned] of Object.entries(packageVersions())) {
    try {
      versions[name] = installedVersion(name) ?? pinned;
    } catch {
      versions[name] = `${pinned} (not installed)`;
    }
  }
  return versions;
}

function installedVersion(name: string): string | undefined {
  for (const folder of require.resolve.paths(name) ?? []) {
    try {
      // eslint-disable-next-line @typescript-eslint/no-require-imports
      return (require(`${folder}/${name}/package.json`) as { version: string }).version;
    } catch {
      // Not in this folder: look in the next one up.
    }
  }
  return undefined;
}
