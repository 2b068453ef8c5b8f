import type { Suite } from '../../suite';
import { rockMaterialNames } from './rock-materials';

/** What each row of a batch is, by its name. */
export interface SampleRoles {
  /** Name of the reference material of each row, '' for none. */
  readonly material: readonly string[];
  readonly blank: readonly boolean[];
  /** The name that a row's duplicates share: the sample name without a mark such as "dup". */
  readonly base: readonly string[];
}

const marks = 'STD|STANDARD|CRM|SRM|QC|REF|RUN|REP|REPLICATE|DUP|DUPLICATE|CHECK|MONITOR|RPT|REPEAT';
const blankName =
  /^(?:(?:procedural|process|prep(?:aration)?|method|reagent|analytical|total|field|acid|lab(?:oratory)?)[\s_-]*)?(?:blank|blk)(?:$|[\s_#.:(-].*|\d+$)/i;
const duplicateMark = /[\s_.:(/-]*\(?(?:dup(?:licate)?|rep(?:licate|eat)?|rpt|dpl)\)?[\s_.#-]*\d{0,2}\)?$/i;

const patterns = (): readonly (readonly [string, RegExp])[] =>
  rockMaterialNames().map((name) => {
    const loose = name.replace(/([A-Za-z])-?(\d)/g, '$1[\\s_-]*$2').replace(/-/g, '[\\s_-]*');
    return [
      name,
      new RegExp(`^(?:(?:${marks}|USGS|GSJ)[\\s_:-]*)?${loose}(?:[\\s_:#(.-]+(?:${marks}|\\d{1,3}|[A-D])\\)?|(?:STD|CRM|QC))*$`, 'i'),
    ] as const;
  });

/** Finds reference materials, blanks and duplicates by the sample names. */
export function sampleRoles(suite: Suite, duplicateLabel = 'sample'): SampleRoles {
  const materials = patterns();
  const known = new Map<string, string>();
  const materialOf = (name: string): string => {
    let found = known.get(name);
    if (found === undefined) {
      // Longer names first: W-2 must not be found in JW-2.
      found = name === '' || !/\d|bm/i.test(name) ? '' : (materials.find(([, pattern]) => pattern.test(name))?.[0] ?? '');
      known.set(name, found);
    }
    return found;
  };
  const names = suite.samples;
  return {
    material: names.map((name) => materialOf(name.trim())),
    blank: names.map((name) => blankName.test(name.trim())),
    base: suite.label(duplicateLabel).map((name) => name.trim().replace(duplicateMark, '').trim()),
  };
}
