export type { AlterationRule, AlterationScreen } from './alteration';
export { audit, type Audit, type AuditOptions } from './audit';
export type { BlankLimit } from './blanks';
export { censoredSummary, substitute, type CensoredSummary, type SubstitutionRule } from './censored';
export type { ColumnSigma, StatedSigma } from './column-sigma';
export { precisionLine, type DuplicatePrecision, type PrecisionLine, type UnlikePair } from './duplicates';
export type { AccuracyVerdict, MixUp, Recovery } from './recoveries';
export { rockMaterial, rockMaterialNames, type MaterialValue, type RockMaterial } from './rock-materials';
export type { Totals } from './totals';
