/**
 * What a criterion says of a sample, as it stands in a verdict column:
 * 0 met · 1 not met · 2 near (within 1σ of the limit) · 3 not applicable (a reason stands beside it) · 4 not measured.
 */
export const fertilityVerdict = { met: 0, notMet: 1, near: 2, notApplicable: 3, notMeasured: 4 } as const;

/** Names of the verdict codes, by number, for reports. */
export const fertilityVerdictNames = ['met', 'not met', 'near', 'not applicable', 'not measured'] as const;

/**
 * Why a verdict is what it is, beside every verdict: 0 nothing to add · 1 silica outside the criterion's window · 2 no silica on the
 * basis asked for · 3 altered, struck out · 4 weathered, struck out · 5 cumulate · 6 total out of range · 7 below detection, and the bound
 * does not decide · 8 above range, and the bound does not decide · 9 an analyte is missing · 10 a bound decided the verdict.
 */
export const fertilityReason = {
  none: 0,
  silicaOutside: 1,
  silicaUnknown: 2,
  altered: 3,
  weathered: 4,
  cumulate: 5,
  total: 6,
  belowDetection: 7,
  aboveRange: 8,
  missing: 9,
  byBound: 10,
} as const;

/** Names of the reason codes, by number, for reports. */
export const fertilityReasonNames = [
  '',
  'silica outside the window',
  'no silica on this basis',
  'altered: struck out',
  'weathered: struck out',
  'cumulate',
  'total out of range',
  'below detection: the bound does not decide',
  'above range: the bound does not decide',
  'not measured',
  'decided by a detection or range bound',
] as const;
