/** The parts of jstat that are used here; the package ships no types. */
declare module 'jstat' {
  export const jStat: {
    readonly beta: { inv(p: number, alpha: number, beta: number): number };
    readonly chisquare: { cdf(x: number, degreesOfFreedom: number): number; inv(p: number, degreesOfFreedom: number): number };
    readonly studentt: { inv(p: number, degreesOfFreedom: number): number };
    readonly normal: { inv(p: number, mean: number, sd: number): number };
  };
}
