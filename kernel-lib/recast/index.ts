/** recast/: analyses put on one basis: total iron and its oxidation, volatile-free sums, Mg-number, norm. */
export { bufferFugacity, ferricFerrousRatio, type OxygenBuffer } from './iron-redox';
export * from './iron-split';
export * from './magnesium-number';
export * from './norm';
export { normMinerals, normParts, type NormMineral, type NormPart } from './norm-rules';
export * from './total-iron';
export * from './volatile-free';
