import { findAnalyte } from '../chemistry';

/**
 * The element whose isotopes a ratio compares (`87Sr/86Sr` → Sr, `epsilon-Nd` → Nd); undefined for anything else, and for
 * parent–daughter ratios such as `87Rb/86Sr`, which crystallisation does change. Mixing is linear in these when weighted by the element.
 */
export function isotopeElement(symbol: string): string | undefined {
  const epsilon = /^epsilon-([A-Z][a-z]?)$/.exec(symbol);
  if (epsilon !== null) return epsilon[1];
  const ratio = /^\d+([A-Z][a-z]?)\/\d+([A-Z][a-z]?)$/.exec(symbol);
  return ratio !== null && ratio[1] === ratio[2] && findAnalyte(ratio[1]) !== undefined ? ratio[1] : undefined;
}

/**
 * Relative 1σ of an isotope ratio where an analysis does not give its own: 0.00003 for Sr, Nd and Hf, 0.001 for Pb and Os, whose mass fractionation
 * is larger. Common practice, between laboratories.
 */
export function usualRatioError(ratio: string): number {
  return ['Pb', 'Os'].includes(isotopeElement(ratio) ?? '') ? 1e-3 : 3e-5;
}
