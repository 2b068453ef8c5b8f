import type { TableView } from '../display';
import { shortSource } from '../tables';
import { fertilityReason, fertilityReasonNames, fertilityVerdict, fertilityVerdictNames } from './codes';
import type { FertilityScreen, GroupEvidence } from './screen';

/** @internal The criteria that weigh something, in order. */
export function weightedCriteria(screen: FertilityScreen): readonly { readonly key: string; readonly name: string; readonly at: number }[] {
  return screen.answers
    .filter(({ indicator }) => indicator.kind === 'criterion')
    .map(({ indicator }, at) => ({ key: indicator.key, name: indicator.name, at }))
    .filter(({ key }) => screen.weights[key] > 0);
}

/** @internal `12 of 15`, with near ones told apart. */
export function shareText({ tallies }: GroupEvidence, at: number): string {
  const { met, near, asked } = tallies[at];
  return asked === 0 ? 'not asked' : `${met} of ${asked}${near === 0 ? '' : ` (+${near} near)`}`;
}

/** @internal The range in which the rank stays in the middle 95 % of the weight draws. */
export function ranksText({ ranks }: GroupEvidence): string {
  return ranks.best === ranks.worst ? String(ranks.best) : `${ranks.best}–${ranks.worst}`;
}

/** @internal The smallest further measurement, or why there is none. */
export function furtherText({ verdict, further }: GroupEvidence): string {
  return further?.text ?? (verdict === 'undecided' ? 'none: more of the same would not settle it' : '');
}

const two = (value: number): number => Math.round(value * 100) / 100;

/** @internal The ranked table, with the cautions under it. */
export function screenView(screen: FertilityScreen): TableView {
  const criteria = weightedCriteria(screen);
  return {
    title: `Copper-gold screening of ${screen.suite.size} samples by ${screen.label}`,
    columns: [
      'rank',
      screen.label,
      'verdict',
      'score',
      '95 % from',
      'to',
      'samples',
      'asked',
      'struck out',
      'left out',
      ...criteria.map(({ name }) => name),
      'lines of evidence',
      'rank if weights vary',
      'smallest further measurement',
    ],
    rows: screen.groups.map((group) => [
      group.rank,
      group.group,
      group.verdict,
      two(group.score),
      two(group.low),
      two(group.high),
      group.samples,
      group.asked,
      group.struckOut,
      group.leftOut,
      ...criteria.map(({ at }) => shareText(group, at)),
      group.agreement,
      ranksText(group),
      furtherText(group),
    ]),
    notes: screen.cautions,
  };
}

const effectText = { strike: 'struck out', exclude: 'left out', caution: 'counted, with caution' } as const;

/**
 * Every indicator's word on one sample, with what was struck out and why.
 *
 * @param screen what `screenFertility` returned
 * @param sample the sample's name
 * @returns a table to show: indicator, value, verdict, reason, basis, limits of use, source
 * @throws RangeError when the screening has no such sample, or more than one
 * @example explainFertility(screen, 'AM-001').rows
 */
export function explainFertility(screen: FertilityScreen, sample: string): TableView {
  const rows = screen.suite.samples.flatMap((name, row) => (name === sample ? [row] : []));
  if (rows.length !== 1) {
    throw new RangeError(
      rows.length === 0
        ? `explainFertility: there is no sample "${sample}". The first names are: ${screen.suite.samples.slice(0, 8).join(', ')}.`
        : `explainFertility: "${sample}" names ${rows.length} rows (${rows.map((row) => row + 1).join(', ')}); give every sample its own name.`,
    );
  }
  const [row] = rows;
  const flagged = screen.guards.filter(({ flags }) => flags[row] === 1);
  return {
    title: `${sample}: what the screening asked`,
    columns: ['indicator', 'value', 'verdict', 'why', 'limits of use', 'source', 'standing'],
    rows: screen.answers.map(({ indicator, values, verdicts, reasons, withoutGuards }) => [
      indicator.name,
      values?.values[row] ?? null,
      indicator.kind === 'criterion'
        ? verdictText(verdicts[row], reasons[row], withoutGuards[row])
        : indicator.kind === 'shown'
          ? 'shown only'
          : 'read on the group',
      fertilityReasonNames[reasons[row]],
      indicator.limits,
      shortSource(indicator.source),
      indicator.standing,
    ]),
    notes: [...flagged.map(({ guard }) => `Flagged: ${guard.name} (${effectText[guard.effect]}). ${guard.note}`), ...screen.cautions],
  };
}

/** @internal A verdict as text; a struck-out one keeps what it would have been. */
export function verdictText(verdict: number, reason: number, withoutGuards: number): string {
  const guarded = reason >= fertilityReason.altered && reason <= fertilityReason.total;
  if (verdict === fertilityVerdict.notApplicable && guarded) return `struck out (${fertilityVerdictNames[withoutGuards]})`;
  return fertilityVerdictNames[verdict];
}
