import type { Suite } from '../suite';
import { schemeNeeds } from './needs';
import type { Scheme } from './scheme';

/** Elements that alteration moves easily; a scheme that reads one of them is set back where a sample is flagged. */
const mobile = ['K2O', 'Na2O', 'CaO', 'Rb', 'Sr', 'Ba'];

/** Texts that say a sample is fresh. */
const fresh = /^\s*(|-|none|no|fresh|unaltered|false|0)\s*$/i;

/** The audit's flag of every sample ('' = none), or undefined when the suite has no such label. */
export function alterationFlags(suite: Suite): readonly string[] | undefined {
  return suite.labels.get('alteration')?.map((text) => (fresh.test(text) ? '' : text));
}

/** Words by which a flag names the element that moved. */
const named: Readonly<Record<string, RegExp>> = {
  K2O: /\bK(2O)?\b|potass|seric|alkali/i,
  Na2O: /\bNa(2O)?\b|sod|alkali|spilit|albit/i,
  CaO: /\bCa(O)?\b|lime|carbonat|calcit/i,
  Rb: /\bRb\b/,
  Sr: /\bSr\b/,
  Ba: /\bBa\b/,
};

/**
 * Which of the elements that a scheme reads are flagged as moved. A flag may hold several reasons (`LOI 4 above 2.5; Na2O 0.6 below 1`):
 * one that names an element speaks of that element, one that names none (loss on ignition, an index) of every mobile one.
 */
export function movedFor(scheme: Scheme, flag: string): readonly string[] {
  if (flag.trim() === '') return [];
  const read = schemeNeeds(scheme).filter((symbol) => mobile.includes(symbol));
  const spoken = flag.split(';').map((reason) => mobile.filter((symbol) => named[symbol].test(reason)));
  return spoken.some((symbols) => symbols.length === 0) ? read : read.filter((symbol) => spoken.some((symbols) => symbols.includes(symbol)));
}
