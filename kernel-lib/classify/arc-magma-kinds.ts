import { showAs, type Showable, type TableCell } from '../display';
import { evaluate, step, type Step, type Suite } from '../suite';
import { operandsOf, type IronBasis } from './axes';
import { findScheme, sourceText } from './catalogue';
import { classifyOptions, judge, schemesCarried } from './classify';
import type { SchemeVerdict } from './verdicts';

/** What published criteria say about the kind of arc magma, each list apart (n). */
export interface ArcMagmaKinds extends Showable {
  readonly suite: Suite;
  /** By scheme key. */
  readonly schemes: ReadonlyMap<string, SchemeVerdict>;
  /** Kinds whose criteria are met, in words (n): `high-Mg andesite; adakite-like (Martin 1999, not Defant & Drummond 1990)`. */
  readonly kinds: readonly string[];
  /** Where lists for the same kind disagree, and why (n). */
  readonly disagreements: readonly string[];
  /** log10 of Th/Yb above the axis through N-MORB and OIB at the sample's Nb/Yb (n; NaN where it is not known). */
  readonly aboveMantleAxis: Float64Array;
  readonly lineage: readonly Step[];
}

/** Lists that speak of one kind, and so can disagree. */
const families: readonly { readonly kind: string; readonly keys: readonly string[] }[] = [
  { kind: 'boninite', keys: ['boninite'] },
  { kind: 'high-Mg andesite', keys: ['high-mg-andesite'] },
  { kind: 'high-Mg-number andesite', keys: ['high-mg-number-andesite'] },
  { kind: 'primitive andesite', keys: ['primitive-andesite'] },
  { kind: 'sanukitoid', keys: ['sanukitoid'] },
  { kind: 'adakite-like', keys: ['adakite-1990', 'adakite-2007', 'adakite-1999'] },
  { kind: 'high Sr/Y', keys: ['high-sr-y-1990', 'high-sr-y-2007', 'high-la-yb'] },
  { kind: 'shoshonite association', keys: ['shoshonite-association'] },
];

/**
 * Asks the published criteria for kinds of arc magma: boninite, high-Mg andesite, sanukitoid, adakite-like and high Sr/Y rocks, the
 * shoshonite association; each list apart, with where lists disagree. Chemistry says "like", not how a magma came about.
 *
 * @param suite n samples; oxides in wt %, elements in ppm
 * @param options `iron` in the volatile-free sum
 * @returns verdicts by scheme, kinds and disagreements in words (n), and the height above the mantle axis in Th/Yb
 * @source the works named by each scheme
 * @example arcMagmaKinds(suite).kinds
 */
export function arcMagmaKinds(suite: Suite, options: { readonly iron?: IronBasis } = {}): ArcMagmaKinds {
  const { iron } = classifyOptions({ iron: options.iron }, 'arcMagmaKinds');
  const operands = operandsOf(suite, iron);
  const keys = families.flatMap((family) => family.keys);
  const verdicts = new Map(keys.map((key) => [key, judge(operands, findScheme(key))]));
  const kinds = new Array<string>(suite.size).fill('');
  const disagreements = new Array<string>(suite.size).fill('');
  const cited = new Map(keys.map((key) => [key, sourceText(findScheme(key).sources[0])]));
  for (let i = 0; i < suite.size; i++) {
    const met: string[] = [];
    const apart: string[] = [];
    for (const { kind, keys: lists } of families) {
      const yes = lists.filter((key) => verdicts.get(key)!.field[i] === 0);
      const no = lists.filter((key) => verdicts.get(key)!.field[i] === 1);
      if (yes.length === 0) continue;
      met.push(lists.length === 1 ? kind : `${kind} (${yes.map((key) => cited.get(key)).join(', ')})`);
      if (no.length > 0) apart.push(`${kind}: ${no.map((key) => `${cited.get(key)} ${verdicts.get(key)!.remarks[i]}`).join('; ')}`);
    }
    kinds[i] = met.join('; ');
    disagreements[i] = apart.join('. ');
  }
  const because = step('arcMagmaKinds', { schemes: keys, iron }, schemesCarried([...keys, 'th-nb'].map(findScheme)));
  const made = {
    suite,
    schemes: verdicts,
    kinds,
    disagreements,
    aboveMantleAxis: aboveMantleAxis(suite),
    lineage: [...operands.onBasis('volatile-free').lineage, because],
  };
  return showAs(made, kindTable);
}

function aboveMantleAxis(suite: Suite): Float64Array {
  const away = new Float64Array(suite.size).fill(NaN);
  const scheme = findScheme('th-nb');
  const [[xa, ya], [xb, yb]] = scheme.lines[0].points.map(([x, y]) => [Math.log10(x), Math.log10(y)]);
  if (!['Nb', 'Yb', 'Th'].every((symbol) => suite.has(symbol))) return away;
  const [nb, th] = ['Nb / Yb', 'Th / Yb'].map((ratio) => evaluate(suite, ratio, { sigma: false }).values);
  return away.map((_, i) => Math.log10(th[i]) - (ya + ((yb - ya) * (Math.log10(nb[i]) - xa)) / (xb - xa)));
}

function kindTable({ suite, kinds, disagreements, aboveMantleAxis: above }: Omit<ArcMagmaKinds, 'toMimeBundle'>) {
  const rows = Array.from({ length: Math.min(60, suite.size) }, (_, i): TableCell[] => [
    suite.samples[i],
    kinds[i] === '' ? 'none of those asked' : kinds[i],
    disagreements[i],
    Number.isFinite(above[i]) ? Number(above[i].toFixed(2)) : null,
  ]);
  return {
    title: 'Kinds of arc magma by published criteria',
    columns: ['sample', 'criteria met', 'lists that disagree', 'log Th/Yb above the mantle axis'],
    rows,
    totalRows: suite.size,
    notes: [
      'Criteria describe chemistry; they do not prove melting of the slab.',
      'The mantle axis is derived from N-MORB and OIB and is no published boundary.',
    ],
  };
}
