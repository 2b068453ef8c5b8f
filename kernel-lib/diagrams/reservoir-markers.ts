import { evaluate, type Suite } from '../suite';
import { shortSource } from '../tables';
import { referenceComposition, reservoirSuite } from '../tracers';
import type { MarkerShape } from './layers/markers';

/** Short names of reservoirs beside their marks; a reservoir without one is named by what stands before its bracket. */
const shortNames: Readonly<Record<string, string>> = {
  'depleted-mantle-2005': 'DMM',
  'depleted-mantle-2004': 'DMM 2004',
  'primitive-mantle-1989': 'PM',
  'n-morb-1989': 'N-MORB',
  'e-morb-1989': 'E-MORB',
  'oib-1989': 'OIB',
  'all-morb-2013': 'mean MORB',
  'subducting-sediment-1998': 'GLOSS',
  'subducting-sediment-2014': 'GLOSS-II',
  'upper-crust-2014': 'upper crust',
  'lower-crust-2014': 'lower crust',
};

/** Reservoirs as marks on two axes, and the sentence that names their sources. */
export interface ReservoirMarks {
  readonly markers: readonly MarkerShape[];
  readonly caption: string;
  readonly sources: readonly string[];
  /** The reservoirs as a suite, for a lineage. */
  readonly suite?: Suite;
}

/**
 * Puts reservoirs on two axes by their tabled values; one that lacks a value is left out and named in the caption.
 *
 * @throws RangeError for an unknown reservoir
 */
export function reservoirMarks(
  keys: readonly string[],
  axes: { readonly x: string; readonly y: string; readonly reference?: (symbol: string) => number },
): ReservoirMarks {
  if (keys.length === 0) return { markers: [], caption: '', sources: [] };
  const suite = reservoirSuite(keys);
  const markers: MarkerShape[] = [];
  const absent: string[] = [];
  const sources = new Set<string>();
  keys.forEach((key, i) => {
    const one = suite.rows([i]);
    const [x, y] = [axes.x, axes.y].map((text) => {
      try {
        return evaluate(one, text, { reference: axes.reference, sigma: false }).values[0];
      } catch {
        return NaN; // no reservoir in the list holds the analyte at all
      }
    });
    const label = shortNames[key] ?? suite.label('name')[i].replace(/\s*[(,].*$/, '');
    if (Number.isNaN(x) || Number.isNaN(y)) {
      absent.push(label);
      return;
    }
    const cited = referenceComposition(key).sources.map(shortSource).join('; ');
    referenceComposition(key).sources.forEach((source) => sources.add(source));
    markers.push({ x, y, label, note: cited });
  });
  const bySource = new Map<string, string[]>();
  for (const { label, note = '' } of markers) bySource.set(note, [...(bySource.get(note) ?? []), label]);
  const named = [...bySource].map(([cited, labels]) => `${labels.join(', ')} (${cited})`).join('; ');
  const caption = `${named === '' ? '' : `Stars: ${named}.`}${absent.length === 0 ? '' : ` No value for ${absent.join(', ')}.`}`.trim();
  return { markers, caption, sources: [...sources], suite };
}
