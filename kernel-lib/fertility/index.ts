/** fertility/: evidence and ranking for copper-gold exploration screening. */
export type { IndicatorAnswers } from './answers';
export * from './binomial';
export * from './calibration';
export { standingCautions } from './cautions';
export * from './codes';
export { saveFertilityCsv, type SavedScreen } from './export-csv';
export type { FertilityRows } from './export-columns';
export * from './export-geojson';
export { saveFertilityWorkbook } from './export-workbook';
export type { FurtherMeasurement, FurtherOutcome } from './further';
export type { FertilityBasis } from './ground';
export type { IndicatorTrend, IndicatorValues } from './group-values';
export type { GuardFlags } from './guard-flags';
export { labelledDistricts } from './labelled';
export type { EvidenceScore, FamilyStance, GroupVerdict } from './score';
export { rankGroups, screenFertility, type FertilityScreen, type GroupEvidence, type ScreenOptions } from './screen';
export type { RankingOptions, WeightingOptions } from './settings';
export {
  fertilityGuards,
  fertilityIndicators,
  fertilityWeights,
  type FertilityComparison,
  type FertilityCondition,
  type FertilityGuard,
  type FertilityIndicator,
  type FertilityWeight,
  type SilicaWindow,
} from './tables';
export type { IndicatorTally } from './tally';
export { explainFertility } from './view';
export type { RankRange } from './weight-sensitivity';
