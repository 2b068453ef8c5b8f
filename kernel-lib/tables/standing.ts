/**
 * How far a published number has been checked: `verified` (seen in its source or in two independent copies), `checked once`,
 * `computed` (follows from a definition or a formula), `from memory` (recalled, not seen: to be checked before it is relied on).
 */
export type Standing = 'verified' | 'checked once' | 'computed' | 'from memory';

export const standings = ['verified', 'checked once', 'computed', 'from memory'] as const satisfies readonly Standing[];
