import type { Suite } from '../suite';
import { isotopeElement, usualRatioError } from './isotopes';
import type { MassBalance } from './mass-balance';
import { amountOf, errorOf } from './one-analysis';
import type { TraceTest, TraceTestElement, TraceTestRatio } from './trace-test';

/** Isotope ratios that both lavas have, and how far they moved. */
export function compareRatios(parent: Suite, daughter: Suite, least: number | undefined): TraceTestRatio[] {
  const both = parent.analytes.filter(
    (symbol) =>
      isotopeElement(symbol) !== undefined && !symbol.startsWith('epsilon') && amountOf(parent, symbol) > 0 && amountOf(daughter, symbol) > 0,
  );
  return both.map((ratio) => {
    const [before, after] = [amountOf(parent, ratio), amountOf(daughter, ratio)];
    const sigmaOf = (analysis: Suite) => Math.max(errorOf(analysis, ratio) || 0, (least ?? usualRatioError(ratio)) * amountOf(analysis, ratio));
    return { ratio, parent: before, daughter: after, off: (after - before) / Math.hypot(sigmaOf(parent), sigmaOf(daughter)) };
  });
}

/** The verdict by the rule of `testTraces`, in words. */
export function judgeTraces(
  balance: MassBalance,
  elements: readonly TraceTestElement[],
  ratios: readonly TraceTestRatio[],
): { verdict: TraceTest['verdict']; why: string } {
  const pair = `${balance.daughter.samples[0]} from ${balance.parent.samples[0]} by crystallisation`;
  const off = elements.filter(({ finding }) => finding === 'disagrees').sort((a, b) => Math.abs(b.outside) - Math.abs(a.outside));
  const far = off.filter(({ outside }) => Math.abs(outside) > 3);
  const told = elements.filter(({ finding }) => finding === 'agrees');
  const say = (list: readonly TraceTestElement[]) =>
    list
      .slice(0, 6)
      .map(
        ({ element, observed, low, high, outside }) =>
          `${element} (observed ${format(observed)}, predicted ${format(low)}–${format(high)} ppm, ${Math.abs(outside).toFixed(1)}σ ` +
          `${outside > 0 ? 'above' : 'below'})`,
      )
      .join('; ');
  const moved = ratios.filter((each) => Math.abs(each.off) > 3);
  const against = [
    ...(balance.probability < 0.01
      ? [`The majors do not fit (chi-square ${balance.chiSquare.toPrecision(3)}, probability ${balance.probability.toPrecision(2)})`]
      : []),
    ...(moved.length > 0
      ? [
          `The system was not closed: ` +
            moved
              .map(({ ratio, parent, daughter, off: by }) => `${ratio} went from ${parent} to ${daughter} (${Math.abs(by).toFixed(1)}σ)`)
              .join(', '),
        ]
      : []),
  ];
  if (against.length > 0)
    return {
      verdict: 'rejected',
      why: `Rejected: ${pair}. ${against.join('. ')}.${off.length > 0 ? ` Outside what the published coefficients allow: ${say(off)}.` : ''}`,
    };
  if (balance.F.value >= 0.99)
    return {
      verdict: 'undecided',
      why: `Undecided: ${pair}. Next to nothing crystallised (F = ${balance.F.value.toFixed(3)}), so nothing is tested.`,
    };
  if (far.length > 0 || off.length > Math.max(1, 0.1 * elements.length))
    return { verdict: 'rejected', why: `Rejected: ${pair}. Outside what the published coefficients allow: ${say(off)}.` };
  const compatible = told.some(({ bulk }) => bulk > 1);
  const incompatible = told.some(({ bulk }) => bulk < 0.5);
  if (told.length >= 4 && compatible && incompatible) {
    return {
      verdict: 'accepted',
      why:
        `Accepted: ${pair}. ${told.length} of ${elements.length} elements agree within ranges narrow enough to tell ` +
        `(${told.map(({ element }) => element).join(', ')})${off.length > 0 ? `; ${say(off)} is the one exception` : ''}.`,
    };
  }
  const lack = [
    ...(told.length < 4 ? [`only ${told.length} of ${elements.length} elements have ranges narrow enough to tell`] : []),
    ...(compatible ? [] : ['none that the crystals take up (D > 1) is among them']),
    ...(incompatible ? [] : ['none that stays in the liquid (D < 0.5) is among them']),
  ];
  return { verdict: 'undecided', why: `Undecided: ${pair}. Nothing contradicts it, but ${lack.join(', and ')}.` };
}

const format = (value: number): string => String(Number(value.toPrecision(3)));
