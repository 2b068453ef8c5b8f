/** models/: how a magma changed: forward paths, and inverse fits that test them. */
export { assimilate, type AssimilateOptions } from './assimilate';
export type { BalanceErrors, BalanceMinerals, BalanceOptions, MineralRange } from './balance-input';
export {
  crystalliseInSitu,
  refillChamber,
  refineByZones,
  type InSituOptions,
  type RefilledChamberOptions,
  type ZoneRefiningOptions,
} from './chambers';
export {
  MissingCoefficientsError,
  type Assemblage,
  type MissingCoefficient,
  type OwnCoefficient,
  type OwnCoefficients,
  type UsedCoefficient,
} from './coefficients';
export { crystallise, type CrystalliseOptions } from './crystallise';
export { isotopeElement, usualRatioError } from './isotopes';
export {
  massBalance,
  type BalanceEstimate,
  type BalancePhase,
  type BalanceResidual,
  type MassBalance,
  type MassBalanceOptions,
} from './mass-balance';
export { melt, type MeltingFacies, type MeltOptions } from './melt';
export { mineralOf, solidSolution, type ChosenMineral, type MineralChoice } from './minerals';
export { mix, mixingHyperbola, type MixingEnd, type MixingHyperbola, type MixOptions } from './mix';
export type { Composition } from './one-analysis';
export type { ModelPath } from './path';
export type { TraceModelOptions } from './trace-setup';
export { rankAssemblages, type AssemblageRanking, type RankAssemblagesOptions, type RankedAssemblage } from './rank-assemblages';
export { silicaOfMeltTypes, testTraces, type TraceTest, type TraceTestElement, type TraceTestOptions, type TraceTestRatio } from './trace-test';
export { withLiquidProperties, type LiquidConditions, type LiquidRedox, type LiquidThermometer } from './liquid-properties';
export { suspensionFactor } from './melt-viscosity';
export {
  apatiteSolubility,
  apatiteTemperature,
  withSaturationTemperatures,
  zirconiumInZircon,
  zirconSolubility,
  zirconTemperature,
  type ZirconModel,
} from './saturation';
export { wholeRockPath } from './whole-rock-path';
export type { CrystalStage, PathConditions, PathMineral, WholeRockOptions } from './whole-rock-options';
export { primaryMelt, type PrimaryMelt, type PrimaryMeltOptions } from './primary-melt';
export type { DescentProcess } from './descent-laws';
export {
  fitDescent,
  type CompanionTest,
  type DescentElement,
  type DescentFit,
  type DescentRival,
  type DescentSample,
  type FitDescentOptions,
} from './fit-descent';
export { fitAssemblage, type AssemblageFit, type FitAssemblageOptions, type FittedPhase } from './fit-assemblage';
export { spreadOfPath, type PathSpread, type PathSpreadOptions } from './path-spread';
