const zero = 0x30;
const point = 0x2e;
const minus = 0x2d;

/** 10^k for k from 0 to 22: the powers that a double holds exactly. */
const exactPowers = Float64Array.from({ length: 23 }, (_, k) => Number(`1e${k}`));
const digits = new Uint8Array(6);

/**
 * Writes a number with up to six significant digits, in the manner of C's `%.6g`: no trailing zeros, an exponent below 1e-4 and from 1e6
 * on. NaN writes nothing. Turning a number into text is most of the time of writing a large table, so it is done on the bytes; where
 * rounding could go either way, the exact conversion of the language decides.
 *
 * @param to receives the ASCII characters; needs room for 16 from `at` on
 * @returns the position after the last character
 */
export function significantDigits(value: number, to: Uint8Array, at: number): number {
  if (value === 0) {
    to[at] = zero;
    return at + 1;
  }
  const size = value < 0 ? -value : value;
  if (!(size >= 1e-4 && size < 999_999)) return slowly(value, to, at);
  // `exponent` is that of the leading digit; the six digits are size × 10^(5 − exponent), rounded.
  const exponent =
    size >= 1
      ? size >= 1e3
        ? size >= 1e5
          ? 5
          : size >= 1e4
            ? 4
            : 3
        : size >= 100
          ? 2
          : size >= 10
            ? 1
            : 0
      : size >= 0.1
        ? -1
        : size >= 0.01
          ? -2
          : size >= 1e-3
            ? -3
            : -4;
  const scaled = size * exactPowers[5 - exponent];
  let whole = Math.floor(scaled);
  const rest = scaled - whole;
  // One multiplication is off by at most one part in 10^16, here less than 1e-9 of a unit.
  if (rest > 0.499999 && rest < 0.500001) return slowly(value, to, at);
  if (rest > 0.5) whole++;
  if (whole >= 1_000_000 || whole < 100_000) return slowly(value, to, at);
  for (let k = 5; k >= 0; k--) {
    const next = (whole / 10) | 0;
    digits[k] = whole - next * 10;
    whole = next;
  }
  let last = 5;
  while (last > 0 && digits[last] === 0) last--;
  if (value < 0) to[at++] = minus;
  if (exponent < 0) {
    to[at++] = zero;
    to[at++] = point;
    for (let k = -1; k > exponent; k--) to[at++] = zero;
    for (let k = 0; k <= last; k++) to[at++] = zero + digits[k];
    return at;
  }
  for (let k = 0; k <= exponent; k++) to[at++] = zero + digits[k];
  if (last > exponent) {
    to[at++] = point;
    for (let k = exponent + 1; k <= last; k++) to[at++] = zero + digits[k];
  }
  return at;
}

function slowly(value: number, to: Uint8Array, at: number): number {
  if (Number.isNaN(value)) return at;
  const text = sixDigits(value);
  for (let k = 0; k < text.length; k++) to[at++] = text.charCodeAt(k);
  return at;
}

/** The same as text, by the language's own conversion. */
export function sixDigits(value: number): string {
  if (Number.isNaN(value)) return '';
  if (!Number.isFinite(value)) return value > 0 ? 'inf' : '-inf';
  if (value === 0) return '0';
  const [mantissa, exponent] = value.toExponential(5).split('e');
  const power = Number(exponent);
  const short = mantissa.includes('.') ? mantissa.replace(/\.?0+$/, '') : mantissa;
  if (power < -4 || power >= 6) return `${short}e${power < 0 ? '-' : '+'}${String(Math.abs(power)).padStart(2, '0')}`;
  return String(Number(value.toPrecision(6)));
}
