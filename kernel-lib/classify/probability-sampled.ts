import { seededRandom } from '../chemistry';
import type { Suite } from '../suite';
import { operandsOf, type IronBasis } from './axes';
import { compileScheme } from './compile';
import { outcomes } from './conditions';
import { fieldAt } from './geometry';
import { bareSuite, planeColumns } from './plane-columns';
import type { FieldProbabilities, ProbabilitySettings } from './probability';
import type { Scheme } from './scheme';
import type { SchemeVerdict } from './verdicts';

/** Rows handled at once: enough to make whole-column work pay, few enough to stay in cache. */
const rowsAtOnce = 20_000;

/**
 * Probabilities by drawing analyses: every uncertain cell is drawn from a normal about its value (a draw below zero counts as zero), the
 * drawn analysis is recast and asked anew. The same draws serve every scheme.
 */
export function sampledProbabilities(
  raw: Suite,
  iron: IronBasis,
  verdicts: readonly SchemeVerdict[],
  uncertain: readonly string[],
  { draws, seed }: ProbabilitySettings,
): ReadonlyMap<string, FieldProbabilities> {
  const { size } = raw;
  const schemes = verdicts.map(({ scheme }) => scheme);
  const counts = schemes.map(({ fields }) => fields.map(() => new Float64Array(size)));
  const asked = schemes.map(() => new Float64Array(size));
  const { normal } = seededRandom(seed, 'classify');
  const copies = Math.max(1, Math.min(draws, Math.floor(rowsAtOnce / Math.max(1, size))));
  for (let done = 0; done < draws;) {
    const now = Math.min(copies, draws - done);
    const rows = new Int32Array(size * now);
    for (let r = 0; r < rows.length; r++) rows[r] = r % size;
    const block = raw.rows(rows);
    const replaced = new Map(
      uncertain.map((symbol): [string, Float64Array] => {
        const { values, sigma } = block.column(symbol);
        return [symbol, values.map((value, i) => (sigma![i] > 0 ? Math.max(0, value + sigma![i] * normal()) : value))];
      }),
    );
    const operands = operandsOf(bareSuite(block, replaced), iron);
    schemes.forEach((scheme, s) => {
      const field = drawnFields(operands, scheme);
      if (field === undefined) return;
      for (let r = 0; r < field.length; r++) {
        const i = r % size;
        if (field[r] === notPlaced) continue;
        asked[s][i]++;
        if (field[r] >= 0) counts[s][field[r]][i]++;
      }
    });
    done += now;
  }
  const found = new Map<string, FieldProbabilities>();
  schemes.forEach((scheme, s) => {
    const none = new Float64Array(size).fill(1);
    const values = counts[s].map((count) =>
      count.map((each, i) => {
        // No draw of the sample had a place: it lacks an analyte, or no 1σ is known for it.
        const share = asked[s][i] === 0 ? NaN : each / asked[s][i];
        none[i] -= share;
        return share;
      }),
    );
    found.set(scheme.key, { method: 'sampled', values, none: none.map((each) => (Number.isNaN(each) ? NaN : Math.max(0, each))) });
  });
  return found;
}

const notPlaced = -2;

/** Field of every drawn row; −1 in no field, −2 where the row has no place at all. */
function drawnFields(operands: ReturnType<typeof operandsOf>, scheme: Scheme): Int16Array | undefined {
  const field = new Int16Array(operands.suite.size).fill(notPlaced);
  if (scheme.kind === 'criteria') {
    const met = scheme.criteria.filter(({ weight }) => weight === 'required').map((criterion) => outcomes(operands, criterion));
    for (let r = 0; r < field.length; r++) {
      let worst = 1;
      for (const each of met) worst = each[r] === 0 ? 0 : worst === 0 ? 0 : Math.min(worst, each[r]);
      field[r] = worst === 1 ? 0 : worst === 0 ? 1 : notPlaced;
    }
    return field;
  }
  const at = planeColumns(operands, scheme);
  if (at === undefined) return undefined;
  const { flat } = compileScheme(scheme);
  const log = scheme.axes[1].scale === 'log';
  for (let r = 0; r < field.length; r++) {
    const x = at.x[r];
    const y = at.y[r];
    if (!Number.isFinite(x) || !Number.isFinite(y)) continue;
    if (scheme.kind === 'thresholds') {
      let k = 0;
      while (k < scheme.bounds.length && y >= (log ? Math.log10(scheme.bounds[k]) : scheme.bounds[k])) k++;
      field[r] = k;
    } else field[r] = fieldAt(flat, x, y);
  }
  return field;
}
