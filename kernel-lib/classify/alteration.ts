import type { Suite } from '../suite';
import { schemeNeeds } from './needs';
import type { Scheme } from './scheme';

/** Elements that alteration moves easily; a scheme that reads one of them is set back where a sample is flagged. */
const mobile = ['K2O', 'Na2O', 'CaO', 'Rb', 'Sr', 'Ba'];

/** The audit's flag of every sample ('' = none), or undefined when the suite has no such label. */
export function alterationFlags(suite: Suite): readonly string[] | undefined {
  return suite.labels.get('alteration');
}

/** Words by which a flag names the element that moved. */
const named: Readonly<Record<string, RegExp>> = {
  K2O: /\bK(2O)?\b|potass|seric|alkali/i, Na2O: /\bNa(2O)?\b|sod|alkali|spilit|albit/i, CaO: /\bCa(O)?\b|lime|carbonat|calcit/i, Rb: /\bRb\b/, Sr: /\bSr\b/, Ba: /\bBa\b/,
};

/**
 * Which of the elements that a scheme reads are flagged as moved: those that the flag names, or every mobile one when the flag names none.
 */
export function movedFor(scheme: Scheme, flag: string): readonly string[] {
  if (flag === '') return [];
  const read = schemeNeeds(scheme).filter((symbol) => mobile.includes(symbol));
  const spoken = mobile.filter((symbol) => named[symbol].test(flag));
  return spoken.length === 0 ? read : read.filter((symbol) => spoken.includes(symbol));
}
