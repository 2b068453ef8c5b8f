import type { TableCell, TableView } from '../display';
import type { DescentFit, DescentRival, DescentSample } from './fit-descent';

/** The least difference in BIC at which one process is preferred to another. */
export const evidenceNeeded = 2;

/** Kass & Raftery's words for a difference in BIC. */
function strength(difference: number): string {
  return difference > 10 ? 'very strong' : difference > 6 ? 'strong' : difference > evidenceNeeded ? 'positive' : 'hardly any';
}

/** Whether the samples off the line are all more evolved than every sample on it. */
function atTheEnd(samples: readonly DescentSample[]): boolean {
  const out = samples.filter(({ belongs }) => !belongs);
  const least = Math.min(...samples.filter(({ belongs }) => belongs).map(({ F }) => F));
  return out.length > 0 && out.every(({ F }) => F < least);
}

function offLine({ sample, excludedBy, off }: DescentSample): string {
  return `${sample} (${excludedBy}, ${Math.abs(off).toFixed(1)}σ too ${off > 0 ? 'high' : 'low'})`;
}

/** Whether even the best process leaves more than half of the samples unexplained. */
export function mostUnexplained(rivals: readonly DescentRival[], samples: number): boolean {
  return rivals[0].unexplained.length > samples / 2;
}

/** The finding in words: which process, how sure, and which samples are off the line by what. */
export function descentFindings(rivals: readonly DescentRival[], samples: readonly DescentSample[]): string {
  const [best, ...others] = rivals;
  const lead = others[0].difference;
  const out = samples.filter(({ belongs }) => !belongs);
  const beaten = others.map((each) => `${each.process} (BIC ${each.difference.toFixed(1)} higher)`).join(' and ');
  const left = `${best.unexplained.length} of ${samples.length} samples`;
  const sentences: string[] = [];
  if (mostUnexplained(rivals, samples.length)) {
    sentences.push(
      `None of these: even ${best.process}, the best of them, leaves ${left} unexplained. The lavas scatter by more than their errors (see scatter ` +
        `"estimate"), or the suite has more than one parent.`,
    );
  } else {
    sentences.push(
      lead < evidenceNeeded
        ? `Not distinguished: ${best.process} and ${others[0].process} explain the suite equally well (BIC differs by ${lead.toFixed(1)}).`
        : `${best.process[0].toUpperCase()}${best.process.slice(1)} is preferred over ${beaten}: ${strength(lead)} evidence.`,
    );
    if (best.unexplained.length > 0.3 * samples.length)
      sentences.push(`Yet it leaves ${left} unexplained, so no single process of these fits the whole suite.`);
  }
  if (out.length === 0) sentences.push('All samples lie on one liquid line of descent within their errors.');
  else sentences.push(`Not on the line of descent: ${out.map(offLine).join(', ')}.`);
  if (atTheEnd(samples)) {
    sentences.push(
      'They are the most evolved ones, all together: a change in the crystallising assemblage would look the same, so fit the two ' +
        'segments apart before calling them foreign.',
    );
  }
  return sentences.join(' ');
}

/** The fit as a table of its samples, least evolved first. */
export function descentView(fit: Omit<DescentFit, 'toMimeBundle'>): TableView {
  const { companion, elements, rivals, incompatible, r } = fit;
  const slopes = elements.map(({ element, slope, slopeSigma, D, DSigma }) => {
    return `${element} ${slope.toFixed(2)} ± ${slopeSigma.toFixed(2)} (D ${D.toFixed(2)} ± ${DSigma.toFixed(2)})`;
  });
  const compared = rivals.map(({ process, bic, parameters, unexplained }) => {
    return `${process} BIC ${bic.toFixed(1)} with ${parameters} parameters, ${unexplained.length} unexplained`;
  });
  const straight = Math.abs(companion.bend) > 3 ? 'not straight: two-component mixing is not the whole story' : 'straight within error';
  return {
    title: fit.why,
    columns: ['Sample', 'F', '1σ', 'χ²', 'Degrees of freedom', 'Probability', 'On the line', 'Excluded by', 'Off by (σ)'],
    rows: [...fit.samples]
      .sort((a, b) => b.F - a.F)
      .map((each): TableCell[] => [
        each.sample,
        each.F,
        each.FSigma,
        each.chiSquare,
        each.degreesOfFreedom,
        each.probability,
        each.belongs ? 'yes' : 'no',
        each.excludedBy,
        each.off,
      ]),
    notes: [
      `Slopes in log–log space against ${incompatible}, and the bulk D they mean: ${slopes.join(', ')}.`,
      `Rivals: ${compared.join('; ')}${Number.isNaN(r) ? '' : ` (best r ${r.toFixed(2)})`}.`,
      `Companion plot ${companion.y} against ${companion.x}: correlation ${companion.correlation.toFixed(3)}, bend ` +
        `${companion.bend.toFixed(1)}σ (${straight}).`,
      ...fit.notes,
    ],
  };
}
