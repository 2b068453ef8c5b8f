import { shortSource } from '../tables';
import { fertilityVerdict } from './codes';
import type { Evidence } from './evidence';

/** What holds for every whole-rock screening, printed with every verdict. */
export const standingCautions = [
  'Whole-rock chemistry screens provinces and suites; it does not find ore. A rank is an order of evidence, not a probability of a deposit.',
  'Alteration, weathering, cumulates and sampling bias mislead: look at what was struck out or left out before you trust a rank.',
  'Public disclosure and drilling decisions need a qualified (competent) person under the reporting code that applies, ' +
    'and the local rules for land, safety and environment.',
] as const;

/** @internal The standing cautions in one line, for every row of a file, so that a row that is copied out of its file keeps them. */
export const shortCaution =
  'Screens suites, does not find ore; alteration, cumulates and sampling mislead; disclosure and drilling need a qualified (competent) person.';

/** @internal What these samples in particular call for, after the standing cautions. */
export function cautionsOf(evidence: Evidence, weights: Readonly<Record<string, number>>): string[] {
  const { grounds, guarding, criteria, grouping } = evidence;
  const { suite } = grounds;
  const out: string[] = [
    ...standingCautions,
    'An interval takes the samples of a group as independent draws; several samples of one outcrop make it too narrow.',
  ];
  const label = guarding.guards.find(({ guard }) => guard.label !== undefined)!;
  if (label.checked === 0)
    out.push(
      `No label "${label.guard.label}": alteration was looked for by chemistry only. Run the audit first, or add the label from the field notes.`,
    );
  for (const { guard, flagged, checked } of guarding.guards) {
    if (checked === 0 && guard.label === undefined && guard.key !== 'sum-without-loi')
      out.push(`The check "${guard.name}" could not be made: what it needs was not measured.`);
    else if (flagged > 0 && guard.effect === 'caution') out.push(`${flagged} ${plural(flagged)} flagged, but counted: ${guard.name}. ${guard.note}`);
    else if (flagged > 0)
      out.push(
        `${flagged} ${plural(flagged)} ${guard.effect === 'strike' ? 'struck out of criteria on mobile elements' : 'left out'}: ${guard.name}.`,
      );
  }
  const noGroup = grouping.of.reduce((count, group) => count + (group < 0 ? 1 : 0), 0);
  if (noGroup > 0) out.push(`${noGroup} ${plural(noGroup)} without a "${grouping.label}": screened, but in no group.`);
  const noSilica =
    grounds.silica === undefined ? suite.size : grounds.silica.values.reduce((count, value) => count + (Number.isNaN(value) ? 1 : 0), 0);
  if (noSilica > 0)
    out.push(
      `${noSilica} ${plural(noSilica)} without silica on this basis, so in no silica window. ` +
        "Where an oxide of the sum was never measured, { basis: 'as given' } asks on reported oxides.",
    );
  for (const { indicator, verdicts } of criteria) {
    if (!(weights[indicator.key] > 0)) continue;
    const unmeasured = verdicts.reduce((count, verdict) => count + (verdict === fertilityVerdict.notMeasured ? 1 : 0), 0);
    if (unmeasured > 0)
      out.push(
        `${indicator.name} (${shortSource(indicator.source)}): not measured in ${unmeasured} ${plural(unmeasured)} that could have been asked.`,
      );
    if (indicator.standing === 'from memory')
      out.push(
        `${indicator.name}: the limit is recalled from ${shortSource(indicator.source)}, not seen in it. Check it there before you rely on it.`,
      );
  }
  const { volatileFree } = grounds;
  const weighted = criteria.filter(({ indicator }) => weights[indicator.key] > 0);
  const withoutSigma = weighted.filter(({ indicator }) =>
    volatileFree.symbols(indicator.expression).every((symbol) => volatileFree.column(symbol)?.sigma === undefined),
  );
  if (withoutSigma.length > 0)
    out.push(
      `No 1σ on ${withoutSigma.map(({ indicator }) => indicator.expression).join(', ')}: ` +
        'there "near" cannot be told from "met" and "not met". The audit gives columns their 1σ.',
    );
  out.push('Zircon indices (such as 10 000·(Eu/Eu*)/Y, Lu et al. 2016) are not whole-rock criteria and are left out.');
  return out;
}

const plural = (count: number): string => (count === 1 ? 'sample' : 'samples');
