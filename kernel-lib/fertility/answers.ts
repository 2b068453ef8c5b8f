import type { Column } from '../suite';
import { fertilityReason, fertilityVerdict } from './codes';
import { finding } from './conditions';
import type { Grounds } from './ground';
import type { Guarding } from './guard-flags';
import type { FertilityIndicator, SilicaWindow } from './tables';

/** What one indicator says of every sample. Arrays have one entry a sample. */
export interface IndicatorAnswers {
  readonly indicator: FertilityIndicator;
  /**
   * The indicator's own quantity (NaN where it has no value), with 1σ and bounds where known; unit '' for a ratio. Undefined when the suite
   * lacks a column that it needs.
   */
  readonly values: Column | undefined;
  /** One number of `fertilityVerdict` a sample, guards applied. All `not applicable` for indicators that give no verdict. */
  readonly verdicts: Uint8Array;
  /** One number of `fertilityReason` a sample. */
  readonly reasons: Uint8Array;
  /** The verdicts as they would be without guards: what is shown struck out. */
  readonly withoutGuards: Uint8Array;
  /** 1 where the sample may be used for this indicator: silica in the window, no guard against it. */
  readonly usable: Uint8Array;
}

/** @internal Asks one indicator of every sample. */
export function askIndicator(indicator: FertilityIndicator, grounds: Grounds, guarding: Guarding): IndicatorAnswers {
  const size = grounds.suite.size;
  const reader = indicator.basis === 'as given' ? grounds.asGiven : grounds.volatileFree;
  const verdicts = new Uint8Array(size).fill(fertilityVerdict.notApplicable);
  const withoutGuards = verdicts.slice();
  const reasons = new Uint8Array(size);
  const usable = new Uint8Array(size);
  const outside = silicaReasons(indicator.silica, grounds.silica, size);
  const found = indicator.kind === 'criterion' ? reader.askAll(indicator.conditions) : undefined;
  const strikes = indicator.onAltered === 'strike';
  const { excluded, struck } = guarding;
  for (let i = 0; i < size; i++) {
    if (outside[i] !== 0) {
      reasons[i] = outside[i];
      continue;
    }
    const against = excluded[i] !== 0 ? excluded[i] : strikes ? struck[i] : 0;
    if (against === 0) usable[i] = 1;
    if (found === undefined) {
      reasons[i] = against;
      continue;
    }
    withoutGuards[i] = verdictOfFinding[found[i]];
    if (against !== 0) {
      reasons[i] = against;
      continue;
    }
    verdicts[i] = withoutGuards[i];
    reasons[i] = reasonOfFinding[found[i]];
  }
  return { indicator, values: reader.quantity(indicator.expression), verdicts, reasons, withoutGuards, usable };
}

const verdictOfFinding: readonly number[] = table({
  met: fertilityVerdict.met,
  metByBound: fertilityVerdict.met,
  notMet: fertilityVerdict.notMet,
  notMetByBound: fertilityVerdict.notMet,
  near: fertilityVerdict.near,
  belowUndecided: fertilityVerdict.notApplicable,
  aboveUndecided: fertilityVerdict.notApplicable,
  missing: fertilityVerdict.notMeasured,
});

const reasonOfFinding: readonly number[] = table({
  met: fertilityReason.none,
  metByBound: fertilityReason.byBound,
  notMet: fertilityReason.none,
  notMetByBound: fertilityReason.byBound,
  near: fertilityReason.none,
  belowUndecided: fertilityReason.belowDetection,
  aboveUndecided: fertilityReason.aboveRange,
  missing: fertilityReason.missing,
});

function table(of: Readonly<Record<keyof typeof finding, number>>): readonly number[] {
  const out: number[] = [];
  for (const [name, code] of Object.entries(finding)) out[code] = of[name as keyof typeof finding];
  return out;
}

/** Reason code for every sample whose silica keeps it from being asked, 0 for the others. */
function silicaReasons({ over, from, below, to }: SilicaWindow, silica: Column | undefined, size: number): Uint8Array {
  const out = new Uint8Array(size);
  if (over === undefined && from === undefined && below === undefined && to === undefined) return out;
  if (silica === undefined) return out.fill(fertilityReason.silicaUnknown);
  const { values } = silica;
  const low = Math.max(over ?? -Infinity, from ?? -Infinity);
  const high = Math.min(below ?? Infinity, to ?? Infinity);
  for (let i = 0; i < size; i++) {
    const value = values[i];
    if (value !== value) out[i] = fertilityReason.silicaUnknown;
    else if (value < low || value > high || value === over || value === below) out[i] = fertilityReason.silicaOutside;
  }
  return out;
}
