import { showAs, type Showable, type TableCell } from '../display';
import { step, type Traced } from '../suite';
import { readBalance, type BalanceMinerals, type BalanceOptions } from './balance-input';
import { recalledMinerals } from './in-words';
import { BalanceSolver, type BalanceProblem } from './balance-solver';
import { freedom, joinColumns } from './mass-balance';
import { joinLineage } from './one-analysis';

/** What `rankAssemblages` takes. */
export interface RankAssemblagesOptions extends BalanceOptions {
  /** The phases to choose from, each with a composition or a range. */
  readonly candidates: BalanceMinerals;
  /** Most phases in one assemblage (default 6). */
  readonly most?: number;
  /** `aicc` (default) or `bic`: how fit is weighed against the number of phases. */
  readonly criterion?: 'aicc' | 'bic';
}

/** One assemblage that was tried. */
export interface RankedAssemblage {
  readonly phases: readonly string[];
  readonly F: number;
  /** Mass of each phase relative to the parent (0–1). */
  readonly masses: Readonly<Record<string, number>>;
  readonly sumOfSquares: number;
  readonly chiSquare: number;
  readonly degreesOfFreedom: number;
  /** Corrected Akaike criterion: χ² + 2k + 2k(k + 1)/(n − k − 1), k masses fitted to n oxides. Infinite where n is too small. */
  readonly aicc: number;
  /** Bayesian criterion: χ² + k ln n. */
  readonly bic: number;
  /** Difference from the best assemblage, and the weight of evidence among all that were tried (0–1). */
  readonly difference: number;
  readonly weight: number;
}

/** Every assemblage tried, best first. */
export interface AssemblageRanking extends Traced, Showable {
  readonly ranked: readonly RankedAssemblage[];
  /** The best assemblage of each size: where more phases stop paying, the criterion rises again. */
  readonly bestOfSize: readonly RankedAssemblage[];
  /** How many subsets were solved; those with a phase at mass zero equal a smaller one and are not listed. */
  readonly tried: number;
  readonly criterion: 'aicc' | 'bic';
  readonly notes: readonly string[];
}

/** Every choice of 1 to `most` of n things, as bit patterns in ascending order. */
function choices(n: number, most: number): number[] {
  const found: number[] = [];
  for (let bits = 1; bits < 1 << n; bits++) {
    let count = 0;
    for (let rest = bits; rest !== 0; rest &= rest - 1) count++;
    if (count <= most) found.push(bits);
  }
  return found;
}

/**
 * Solves the mass balance for every subset of the candidate phases and ranks them by an information criterion, so that a phase that only
 * fits noise is seen to cost more than it brings.
 *
 * @param options as in `massBalance`, with `candidates` (up to 16) in place of minerals; `most` (default 6); `criterion` `aicc` | `bic`
 * @returns all assemblages best first, and the best of each size. Chi-square counts the errors of both analyses as known
 * @throws RangeError or TypeError naming the argument and what is allowed
 * @source Burnham & Anderson 2002 (information criteria and weights); Bryan et al. 1969
 * @example rankAssemblages({ parent, daughter, candidates: { olivine: 'Fo80', clinopyroxene: 'Wo42En46Fs12', plagioclase: 'An75', magnetite:
 *   'Usp30' } }).ranked[0].phases
 */
export function rankAssemblages(options: RankAssemblagesOptions): AssemblageRanking {
  const who = 'rankAssemblages';
  const { most = 6, criterion = 'aicc' } = options ?? {};
  if (criterion !== 'aicc' && criterion !== 'bic') throw new RangeError(`${who}: criterion must be "aicc" or "bic", not "${String(criterion)}".`);
  if (!Number.isInteger(most) || most < 1 || most > 10) throw new RangeError(`${who}: most is ${String(most)}; give a whole number from 1 to 10.`);
  if (options?.errors === 'equal') throw new RangeError(`${who}: an information criterion needs errors; give errors as { relative } or by oxide.`);
  const names = Object.keys(options?.candidates ?? {});
  if (names.length === 0 || names.length > 16) throw new RangeError(`${who}: candidates must name 1 to 16 phases; it names ${names.length}.`);
  // Every phase is read once; the subsets share the columns. Reading needs an oxide a column, so each phase is read in its own balance.
  const parts = names.map((name) => readBalance(options, { [name]: options.candidates[name] }, who));
  const base = parts[0];
  const { n } = base.problem;
  const hasAssimilant = base.assimilant !== undefined;
  const ranked: Omit<RankedAssemblage, 'difference' | 'weight'>[] = [];
  const subsets = choices(names.length, most);
  let tooMany = 0;
  for (const bits of subsets) {
    const chosen = parts.filter((_, i) => (bits & (1 << i)) !== 0);
    const columns = chosen.flatMap((part) => part.columns);
    const k = columns.length + (hasAssimilant ? 1 : 0);
    if (k + (base.problem.closure ? 0 : 1) >= n) {
      tooMany++;
      continue;
    }
    const problem = joinProblems(
      chosen.map((part) => part.problem),
      chosen.map((part) => part.columns.length),
      k,
      hasAssimilant,
    );
    const input = { ...base, columns, problem };
    const solver = new BalanceSolver(n, k);
    solver.solve(problem);
    const { phases, masses } = joinColumns(input, solver.x);
    if (masses.some((mass, j) => mass === 0 && phases[j] !== 'assimilant') || solver.F <= 0) continue;
    const fitted = k + (problem.closure ? 0 : 1);
    const aicc = n - fitted - 1 > 0 ? solver.chiSquare + 2 * fitted + (2 * fitted * (fitted + 1)) / (n - fitted - 1) : Infinity;
    ranked.push({
      phases,
      F: solver.F,
      masses: Object.fromEntries(phases.map((phase, j) => [phase, masses[j]])),
      aicc,
      bic: solver.chiSquare + fitted * Math.log(n),
      sumOfSquares: solver.residuals.reduce((sum, each) => sum + each * each, 0),
      chiSquare: solver.chiSquare,
      degreesOfFreedom: freedom(input, solver),
    });
  }
  ranked.sort((a, b) => a[criterion] - b[criterion] || a.phases.length - b.phases.length);
  const best = ranked[0]?.[criterion] ?? NaN;
  const evidence = ranked.map((each) => (Number.isFinite(each[criterion]) ? Math.exp(-(each[criterion] - best) / 2) : 0));
  const total = evidence.reduce((sum, each) => sum + each, 0);
  const all = ranked.map((each, i): RankedAssemblage => ({ ...each, difference: each[criterion] - best, weight: evidence[i] / total }));
  const sizes = [...new Set(all.map(({ phases }) => phases.length))].sort((a, b) => a - b);
  const notes = [...base.notes];
  if (tooMany > 0) notes.push(`${tooMany} subsets were not solved: they have as many unknowns as oxides.`);
  if (all.length === 0) notes.push('No subset makes the daughter from the parent with all of its phases at work.');
  const because = step(
    who,
    {
      candidates: names,
      most,
      criterion,
      tried: subsets.length - tooMany,
      errors: base.errorModel,
      oxides: [...base.oxides],
      phases: parts.flatMap((part) => part.columns.map(({ phase, chosen }) => [phase, chosen.label, chosen.source, chosen.standing])),
    },
    {
      sources: ['burnham_anderson_2002', 'bryan_1969', 'bro_de_jong_1997'],
      tables: ['mineral-compositions.csv', 'atomic-weights.csv'],
      fromMemory: recalledMinerals(parts.flatMap((part) => part.columns.map(({ chosen }) => chosen))),
      says: `${subsets.length - tooMany} subsets of ${names.join(', ')} were solved and ranked by ${criterion}.`,
    },
  );
  const result = {
    ranked: all,
    bestOfSize: sizes.map((size) => all.find(({ phases }) => phases.length === size)!),
    tried: subsets.length - tooMany,
    criterion,
    notes,
    lineage: [...joinLineage(base.parent.lineage, base.daughter.lineage, base.assimilant?.lineage ?? []), because],
  };
  return showAs(result, (it) => ({
    title: `Assemblages between ${base.parent.samples[0]} and ${base.daughter.samples[0]}, best first (${criterion === 'aicc' ? 'AICc' : 'BIC'})`,
    columns: ['Assemblage', 'Phases', 'F', 'ΣR²', 'χ²', 'Degrees of freedom', criterion === 'aicc' ? 'AICc' : 'BIC', 'Difference', 'Weight'],
    rows: it.ranked
      .slice(0, 15)
      .map((each): TableCell[] => [
        each.phases.map((phase) => `${phase} ${(100 * each.masses[phase]).toFixed(1)}`).join(', '),
        each.phases.length,
        each.F,
        each.sumOfSquares,
        each.chiSquare,
        each.degreesOfFreedom,
        each[criterion],
        each.difference,
        each.weight,
      ]),
    totalRows: it.ranked.length,
    notes: [
      `Best of each size: ` +
        `${it.bestOfSize.map((each) => `${each.phases.length}: ${each.phases.join(' + ')} (${each[criterion].toFixed(1)})`).join('; ')}.`,
      `${it.tried} subsets solved. Errors: ${base.errorModel}.`,
      ...it.notes,
    ],
  }));
}

/** One problem with the phases of several that share their analyses; each ends with the assimilant where there is one. */
function joinProblems(problems: readonly BalanceProblem[], counts: readonly number[], k: number, hasAssimilant: boolean): BalanceProblem {
  const [first] = problems;
  const { n } = first;
  const phases = new Float64Array(k * n);
  let at = 0;
  problems.forEach((problem, i) => {
    phases.set(problem.phases.subarray(0, counts[i] * n), at * n);
    at += counts[i];
  });
  const signs = new Float64Array(k).fill(1);
  if (hasAssimilant) {
    phases.set(first.phases.subarray(counts[0] * n), at * n);
    signs[k - 1] = -1;
  }
  return { ...first, k, phases, signs };
}
