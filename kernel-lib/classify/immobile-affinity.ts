import { showAs, type Showable, type TableCell } from '../display';
import { step, type Step, type Suite } from '../suite';
import { operandsOf } from './axes';
import { findScheme } from './catalogue';
import { judge, schemesCarried } from './classify';
import type { SchemeVerdict } from './verdicts';

/** Affinity by immobile elements (n). */
export interface ImmobileAffinity extends Showable {
  readonly suite: Suite;
  /** `tholeiitic`, `transitional` or `calc-alkaline`; '' where it could not be asked. */
  readonly affinity: readonly string[];
  /** What each ratio says, or what is lacking. */
  readonly because: readonly string[];
  /** The verdict of each ratio: Zr/Y, La/Yb, Th/Yb. */
  readonly ratios: readonly SchemeVerdict[];
  readonly lineage: readonly Step[];
}

/** The schemes behind it. */
export const affinityKeys = ['affinity-zr-y', 'affinity-la-yb', 'affinity-th-yb'] as const;
const ratioNames = ['Zr/Y', 'La/Yb', 'Th/Yb'] as const;

/**
 * Tholeiitic, transitional or calc-alkaline affinity by the ratios of immobile elements Zr/Y, La/Yb and Th/Yb: for altered lavas, whose
 * alkalis moved. At least two of the three ratios are needed; where those asked do not agree, the affinity is transitional.
 *
 * @param suite n samples with Zr, Y, La, Yb, Th in ppm
 * @returns affinity and reasons (n)
 * @source Ross & Bédard 2009 (limits and rule; its curved boundaries are not included)
 * @example immobileAffinity(suite).affinity
 */
export function immobileAffinity(suite: Suite): ImmobileAffinity {
  const operands = operandsOf(suite, 'measured');
  const ratios = affinityKeys.map((key) => judge(operands, findScheme(key)));
  const affinity = new Array<string>(suite.size).fill('');
  const because = new Array<string>(suite.size).fill('');
  const byFields = new Map<number, { affinity: string; because: string }>();
  for (let i = 0; i < suite.size; i++) {
    const [a, b, c] = [ratios[0].field[i], ratios[1].field[i], ratios[2].field[i]];
    const key = a < 0 || b < 0 || c < 0 ? -1 : (a * 3 + b) * 3 + c;
    const same = byFields.get(key);
    if (same !== undefined) {
      affinity[i] = same.affinity;
      because[i] = same.because;
      continue;
    }
    const asked = ratios.map(({ names }) => names[i]);
    const known = asked.filter((name) => name !== '');
    because[i] = asked.map((name, k) => (name === '' ? `${ratioNames[k]} ${ratios[k].remarks[i]}` : `${ratioNames[k]} ${name}`)).join(', ');
    if (known.length < 2) because[i] = `fewer than two ratios: ${because[i]}`;
    else affinity[i] = known.every((name) => name === known[0]) ? known[0] : 'transitional';
    // Rows with all three ratios fall into 27 kinds; the others have reasons of their own.
    if (key >= 0) byFields.set(key, { affinity: affinity[i], because: because[i] });
  }
  const made = step('immobileAffinity', { ratios: [...ratioNames] }, schemesCarried(affinityKeys.map(findScheme)));
  return showAs({ suite, affinity, because, ratios, lineage: [...suite.lineage, made] }, (shown) => ({
    title: 'Affinity by immobile elements',
    columns: ['sample', 'affinity', 'because'],
    rows: Array.from({ length: Math.min(60, suite.size) }, (_, i): TableCell[] => [
      suite.samples[i],
      shown.affinity[i] === '' ? 'not determined' : shown.affinity[i],
      shown.because[i],
    ]),
    totalRows: suite.size,
  }));
}
