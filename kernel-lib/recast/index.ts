/** recast/: analyses put on one basis: total iron, volatile-free sums, Mg-number. */
export * from './magnesium-number';
export * from './total-iron';
export * from './volatile-free';
