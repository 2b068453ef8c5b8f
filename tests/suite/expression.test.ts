import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cellState, column, evaluate, expressionSymbols, parseExpression, reservoir, suiteOf } from 'wedgework';

const chondrite = (symbol: string) => reservoir('chondrite-c1-1989').values.get(symbol)!.value;

const suite = suiteOf({
  columns: [
    column({ symbol: 'Ba', values: [300, 150, NaN], states: Uint8Array.of(0, 0, 1), limits: Float64Array.of(NaN, NaN, 5), sigma: [9, 3, NaN] }),
    column({ symbol: 'Th', values: [2, NaN, 1.5], states: Uint8Array.of(0, 1, 0), limits: Float64Array.of(NaN, 0.5, NaN), sigma: [0.1, NaN, 0.1] }),
    column({ symbol: 'La', values: [10, 20, NaN] }),
    column({ symbol: 'Sm', values: [3, 4, 5] }),
    column({ symbol: 'Zr', values: [100, 50, 80] }),
    column({ symbol: 'TiO2', values: [1, 0.5, 0.8] }),
    column({ symbol: 'FeOT', values: [9, 8, 7] }),
    column({ symbol: 'MgO', values: [6, 4, 2] }),
    column({ symbol: '87Sr/86Sr', values: [0.7031, 0.7032, 0.7033] }),
    column({ symbol: 'slab depth', values: [100, 120, 150], unit: 'km' }),
  ],
});
const first = (text: string) => evaluate(suite, text, { reference: chondrite }).values[0];

describe('evaluate', () => {
  it.each([
    ['Ba/Th', 150],
    ['2 + 3*4^2/8 - 1', 7],
    ['2^3^2', 512],
    ['-(2^2)', -4],
    ['FeO*/MgO', 1.5],
    ['(FeO*)', 9],
    ['log10(Zr) + ln(exp(1)) + sqrt(9) + abs(-1)', 7],
    ['min(La, Sm) + max(La, Sm)', 13],
    ['10000*(87Sr/86Sr - 0.7)', 31],
    ['[slab depth]/10', 10],
  ])('%s is %d', (text, value) => expect(first(text)).toBeCloseTo(value, 10));

  it('divides by the reference where N says so', () => {
    // Sun & McDonough 1989: La 0.237, Sm 0.153 ppm in C1 chondrite.
    const expected = 10 / 0.237 / (3 / 0.153);
    for (const text of ['(La/Sm)N', 'LaN/SmN', 'La_N/Sm_N', '(La/Sm)_N']) expect(first(text)).toBeCloseTo(expected, 10);
  });

  it('converts between wt % and ppm instead of dividing blindly', () => {
    // Zr/TiO2 × 10 000 with Zr in ppm and TiO2 in wt % (the usual axis of Winchester & Floyd 1977 is Zr/TiO2 × 0.0001 in the same sense).
    expect(first('10000*Zr/TiO2')).toBeCloseTo(100, 10);
    expect(first('Zr/TiO2')).toBeCloseTo(0.01, 12);
    // Ti in ppm from TiO2: 1 wt % TiO2 = 5993.5 ppm Ti (IUPAC 2021 weights).
    expect(first('Ti/Zr')).toBeCloseTo(59.935, 3);
    expect(first('MgO + Zr')).toBeCloseTo(6.01, 10);
  });

  it('gives the unit of what it computed', () => {
    expect(evaluate(suite, 'Ba/Th').unit).toBe('');
    expect(evaluate(suite, 'MgO - 2').unit).toBe('wt%');
    expect(evaluate(suite, 'Ba*Ba').unit).toBe('ppm^2');
    expect(evaluate(suite, 'sqrt(Ba*Ba)').unit).toBe('ppm');
  });

  it('refuses to add what cannot be added', () => {
    expect(() => evaluate(suite, 'Ba + [slab depth]')).toThrow('in ppm and one in km cannot be added');
    expect(() => evaluate(suite, 'Ba*Ba - Th')).toThrow('cannot be subtracted');
  });

  it('propagates 1σ to first order, a repeated operand counted once', () => {
    // Quotient of independent values: σ/R = √((σa/a)² + (σb/b)²); textbook error propagation (JCGM 100:2008, 5.1.2).
    expect(evaluate(suite, 'Ba/Th').sigma![0]).toBeCloseTo(150 * Math.hypot(9 / 300, 0.1 / 2), 5);
    expect(evaluate(suite, 'Ba/Ba').sigma![0]).toBeCloseTo(0, 9);
    expect(evaluate(suite, 'Ba + Ba').sigma![0]).toBeCloseTo(18, 6);
    expect(evaluate(suite, 'La/Sm').sigma).toBeUndefined();
  });

  it('gives a bound where an operand is below detection', () => {
    const ratio = evaluate(suite, 'Ba/Th');
    expect([...ratio.states]).toEqual([cellState.derived, cellState.aboveRange, cellState.belowDetection]);
    expect(ratio.limits![1]).toBeCloseTo(300, 10); // 150 / <0.5 is > 300
    expect(ratio.limits![2]).toBeCloseTo(5 / 1.5, 10); // <5 / 1.5 is < 3.33
    expect(ratio.values[1]).toBeNaN();
  });

  it('stays missing where a missing operand leaves no bound', () => {
    expect(evaluate(suite, 'Ba/La').states[2]).toBe(cellState.missing);
    expect(evaluate(suite, 'La/Sm').states[2]).toBe(cellState.missing);
  });

  it('makes a division by zero a missing cell, not an infinite one', () => {
    const result = evaluate(suite, 'Ba/(MgO-6)');
    expect(result.states[0]).toBe(cellState.missing);
    expect(result.values[0]).toBeNaN();
  });

  it('does not write into the suite', () => {
    const result = evaluate(suite, 'Ba');
    expect(result.values).not.toBe(suite.values('Ba'));
    expect(Number.isNaN(suite.values('Ba')[2])).toBe(true);
  });

  it.each([
    ['', 'is empty'],
    ['Ba/', 'not a readable expression'],
    ['Ba/Th)', 'not a readable expression'],
    ['(Ba/Th', 'not a readable expression'],
    ['Ba Th', 'two expressions stand side by side'],
    ['Ba; Th', 'two expressions stand side by side'],
    ['Ba > Th', 'the operator > has no meaning here'],
    ['floor(Ba)', 'there is no function "floor"'],
    ['Ba.constructor', 'is not arithmetic'],
    ['constructor', 'needs constructor'],
    ['-Ba^2', 'can be read in two ways'],
    ['min(Ba)', 'min takes 2 arguments, not 1'],
    ['"Ba"', 'is not a number'],
    ['Rb/Sr', 'needs Rb, Sr, which this suite does not hold'],
    ['(Zr/Th)N)N', 'not a readable expression'],
  ])('refuses %j with a reason', (text, reason) => expect(() => evaluate(suite, text, { reference: chondrite })).toThrow(reason));

  it('says when a reference is lacking', () => {
    expect(() => evaluate(suite, 'LaN')).toThrow('La is to be normalised, but the reference composition is not given');
    expect(() => evaluate(suite, 'LaN', { reference: () => NaN })).toThrow('has no La');
  });

  it('lets named expressions be used by name', () => {
    expect(evaluate(suite, '2*La/Sm*', { named: { 'La/Sm*': 'La/Sm' } }).values[0]).toBeCloseTo(20 / 3, 10);
  });
});

describe('parseExpression', () => {
  it('lists each symbol once', () => {
    expect(expressionSymbols(parseExpression('Ba/(Ba+Th)'))).toEqual(['Ba', 'Th']);
  });
});

/** A random expression over a and b, with its value computed by JavaScript itself. */
const arithmetic = fc.letrec<{ node: { text: string; value: (a: number, b: number) => number } }>((tie) => ({
  node: fc.oneof(
    { depthSize: 'small', withCrossShrink: true },
    fc.constant({ text: '[a]', value: (a: number) => a }),
    fc.constant({ text: '[b]', value: (_: number, b: number) => b }),
    fc.integer({ min: 1, max: 9 }).map((n) => ({ text: String(n), value: () => n })),
    fc.tuple(tie('node'), fc.constantFrom('+', '-', '*', '/'), tie('node')).map(([left, sign, right]) => ({
      text: `(${left.text} ${sign} ${right.text})`,
      value: (a: number, b: number) => {
        const [x, y] = [left.value(a, b), right.value(a, b)];
        return sign === '+' ? x + y : sign === '-' ? x - y : sign === '*' ? x * y : x / y;
      },
    })),
  ),
}));

describe('any expression', () => {
  it('has the value that the language itself gives it', () => {
    fc.assert(
      fc.property(arithmetic.node, fc.integer({ min: 1, max: 50 }), fc.integer({ min: 1, max: 50 }), ({ text, value }, a, b) => {
        const numbers = suiteOf({ columns: [column({ symbol: 'a', values: [a] }), column({ symbol: 'b', values: [b] })] });
        const expected = value(a, b);
        const result = evaluate(numbers, text).values[0];
        if (Number.isFinite(expected)) expect(result).toBeCloseTo(expected, 6);
        else expect(result).toBeNaN();
      }),
    );
  });

  it('bounds every value that the hidden operand could have had', () => {
    fc.assert(
      fc.property(arithmetic.node, fc.integer({ min: 1, max: 50 }), fc.double({ min: 0.1, max: 20, noNaN: true }), fc.double({ min: 0, max: 1, noNaN: true }), ({ text, value }, a, limit, share) => {
        const censored = column({ symbol: 'b', values: [NaN], states: Uint8Array.of(cellState.belowDetection), limits: Float64Array.of(limit) });
        const result = evaluate(suiteOf({ columns: [column({ symbol: 'a', values: [a] }), censored] }), text);
        const truth = value(a, limit * share);
        if (!Number.isFinite(truth) || !text.includes('[b]')) return;
        const slack = 1e-9 * (1 + Math.abs(truth));
        if (result.states[0] === cellState.belowDetection) expect(truth).toBeLessThanOrEqual(result.limits![0] + slack);
        if (result.states[0] === cellState.aboveRange) expect(truth).toBeGreaterThanOrEqual(result.limits![0] - slack);
      }),
      { numRuns: 500 },
    );
  });
});
