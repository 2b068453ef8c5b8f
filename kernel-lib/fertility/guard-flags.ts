import type { Suite } from '../suite';
import { finding } from './conditions';
import type { Grounds } from './ground';
import { fertilityGuards, type FertilityGuard } from './tables';
import { fertilityReason } from './codes';

/** What one guard found: 1 where it flags a sample. */
export interface GuardFlags {
  readonly guard: FertilityGuard;
  /** n; 1 = flagged. */
  readonly flags: Uint8Array;
  readonly flagged: number;
  /** How many samples hold what the guard looks at; 0 means it could not look at all. */
  readonly checked: number;
}

/** @internal All guards, and what they add up to for each sample. */
export interface Guarding {
  readonly guards: readonly GuardFlags[];
  /** Reason code that takes the sample out of every criterion, or 0. */
  readonly excluded: Uint8Array;
  /** Reason code that strikes out criteria on mobile elements, or 0. */
  readonly struck: Uint8Array;
}

/** Texts that a sheet uses to say that a rock is not altered. */
const saysFresh = /^\s*(none|no|fresh|unaltered|least[- ]altered|false|0|-)?\s*$/i;

const reasonOf = {
  alteration: fertilityReason.altered,
  weathering: fertilityReason.weathered,
  cumulate: fertilityReason.cumulate,
  total: fertilityReason.total,
} as const;

/** @internal Asks every guard of every sample. */
export function guardSamples(grounds: Grounds): Guarding {
  const { suite } = grounds;
  const excluded = new Uint8Array(suite.size);
  const struck = new Uint8Array(suite.size);
  const guards = fertilityGuards().map((guard): GuardFlags => {
    const flags = new Uint8Array(suite.size);
    const checked = guard.label === undefined ? flagByConditions(guard, grounds, flags) : flagByLabel(suite, guard.label, flags);
    const target = guard.effect === 'exclude' ? excluded : guard.effect === 'strike' ? struck : undefined;
    let flagged = 0;
    for (let i = 0; i < flags.length; i++) {
      if (flags[i] === 0) continue;
      flagged++;
      if (target !== undefined && target[i] === 0) target[i] = reasonOf[guard.kind];
    }
    return { guard, flags, flagged, checked };
  });
  return { guards, excluded, struck };
}

/**
 * Flags by every label of that name, however it is written: field notes (`Alteration`) and the audit's own (`alteration`) may stand side by
 * side, and neither must be missed.
 */
function flagByLabel(suite: Suite, name: string, flags: Uint8Array): number {
  const written = [...suite.labels].filter(([label]) => label.trim().toLowerCase() === name);
  for (const [, texts] of written) {
    // Labels repeat, so each distinct text is read once.
    const fresh = new Map<string, boolean>();
    for (let i = 0; i < flags.length; i++) {
      let says = fresh.get(texts[i]);
      if (says === undefined) fresh.set(texts[i], (says = saysFresh.test(texts[i])));
      if (!says) flags[i] = 1;
    }
  }
  return written.length === 0 ? 0 : flags.length;
}

function flagByConditions(guard: FertilityGuard, grounds: Grounds, flags: Uint8Array): number {
  const reader = guard.basis === 'as given' ? grounds.asGiven : grounds.volatileFree;
  const found = reader.askAll(guard.conditions);
  let checked = 0;
  for (let i = 0; i < flags.length; i++) {
    if (found[i] !== finding.missing) checked++;
    if (found[i] === finding.met || found[i] === finding.metByBound) flags[i] = 1;
  }
  return checked;
}
