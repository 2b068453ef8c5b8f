/** classify/: one engine, many schemes; schemes are data. Verdicts with distance, probability and reasons. */
export { schemes, findScheme, type SchemeList } from './catalogue';
export { schemeNeeds } from './needs';
export { classify, type ClassifyOptions } from './classify';
export type { FieldProbabilities, ProbabilityMethod, Uncertainty } from './probability';
export * from './scheme';
export { schemeColumns } from './scheme-columns';
export { probabilityText, verdictOf, type CriterionOutcome, type SchemeVerdict, type Verdicts } from './verdicts';
export { nameRocks, type NameOptions, type RockNames } from './name-rocks';
export { namingChain, type NamingChain, type NamingStep } from './naming-chain';
export { suiteTrend, type SuiteTrendGroup, type SuiteTrend, type TrendOptions, type TrendValue } from './suite-trend';
export { immobileAffinity, type ImmobileAffinity } from './immobile-affinity';
export { arcMagmaKinds, type ArcMagmaKinds } from './arc-magma-kinds';
export { consensus, type Consensus, type ConsensusOptions } from './consensus';
export { explain, type Explanation, type ExplanationStep } from './explain';
export { typicalDoubt } from './typical-doubt';
export { withVerdicts } from './with-verdicts';
