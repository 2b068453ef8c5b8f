import fc from 'fast-check';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { assimilate, crystallise, crystalliseInSitu, mix, mixingHyperbola, refillChamber, refineByZones } from 'wedgework';
import { chamberTime, openSystemLiquid, refilledSteadyState } from '../../kernel-lib/models/open-system-laws';
import { equationValues } from './equation-values';

const cases = JSON.parse(readFileSync(join(__dirname, '../data/models/closed-forms.json'), 'utf8')) as { key: string; inputs: any; expected: any }[];
const byKey = (key: string) => cases.find((each) => each.key === key)!;
const bulk = (D: number, element = 'Sr') => ({ assemblage: { bulk: 1 }, coefficients: { bulk: { [element]: D } } });
const last = (values: Float64Array) => values[values.length - 1];

describe('assimilate', () => {
  it('agrees with DePaolo’s equations 6a and 15b, r + D = 1 and r > 1 among them', () => {
    // Computed independently at 40 digits from DePaolo 1981 and checked against Runge–Kutta integration.
    const rows = byKey('model-AFC-depaolo').expected;
    expect(rows.length).toBeGreaterThan(20);
    for (const row of rows) {
      const nd = row.case.includes('Nd');
      const [element, ratio] = nd ? ['Nd', '143Nd/144Nd'] : ['Sr', '87Sr/86Sr'];
      const ratios = row.em === null ? [{}, {}] : [{ [ratio]: row.em }, { [ratio]: row.ea }];
      const path = assimilate({
        from: { [element]: row.Cm0, ...ratios[0] },
        assimilant: { [element]: row.Ca, ...ratios[1] },
        r: row.r,
        ...bulk(row.D, element),
        downTo: row.F,
        steps: 4,
      });
      expect(last(path.liquid.values(element)) / row.C, JSON.stringify(row)).toBeCloseTo(1, 10);
      if (row.em !== null) expect(last(path.liquid.values(ratio))).toBeCloseTo(row.isotope, 10);
    }
  });

  it('agrees with the table of equation values', () => {
    for (const { inputs, value } of equationValues('AFC concentration')) {
      const { F, D, r } = inputs;
      const got = last(assimilate({ from: { Sr: 1 }, assimilant: { Sr: inputs['Ca/Cm0'] }, r, ...bulk(D), downTo: F, steps: 2 }).liquid.values('Sr'));
      expect(Number(got.toPrecision(6))).toBe(value);
    }
    for (const { inputs, value } of equationValues('AFC isotope fraction')) {
      const { F, D, r } = inputs;
      const path = assimilate({
        from: { Sr: 1, '87Sr/86Sr': 0.7 },
        assimilant: { Sr: inputs['Ca/Cm0'], '87Sr/86Sr': 0.71 },
        r,
        ...bulk(D),
        downTo: F,
        steps: 2,
      });
      expect((last(path.liquid.values('87Sr/86Sr')) - 0.7) / 0.01).toBeCloseTo(value, 5);
    }
    for (const { inputs, value } of equationValues('AFC r=1')) {
      const got = last(
        assimilate({
          from: { Sr: 1 },
          assimilant: { Sr: inputs['Ca/Cm0'] },
          r: 1,
          ...bulk(inputs.D),
          crystallised: inputs['Ma/Mm'],
          steps: 2,
        }).liquid.values('Sr'),
      );
      expect(Number(got.toPrecision(6))).toBe(value);
    }
  });

  it('agrees with numerical integration of the mass balance, recharge and isotopes included', () => {
    const [C0, Ca, Cr, R0, Ra, Rr] = [500, 150, 420, 0.7035, 0.72, 0.7042];
    for (const [r, p, D] of [
      [0.3, 0.2, 1.4],
      [0.4, 0.6, 0.3],
      [0.5, 0.9, 2],
      [0.2, 0, 0.8],
      [0.7, 0.3, 1e-3],
    ]) {
      const path = assimilate({
        from: { Sr: C0, '87Sr/86Sr': R0 },
        assimilant: { Sr: Ca, '87Sr/86Sr': Ra },
        recharge: { with: { Sr: Cr, '87Sr/86Sr': Rr }, rate: p },
        r,
        ...bulk(D),
        crystallised: 0.6,
        steps: 3,
      });
      // Masses of magma, of the element, and of the ratio's numerator, stepped by the classical fourth-order Runge–Kutta rule.
      let state = [1, C0, C0 * R0];
      const rate = ([M, N, X]: number[]) => [r + p - 1, r * Ca + p * Cr - (D * N) / M, r * Ca * Ra + p * Cr * Rr - (D * X) / M];
      const n = 4000;
      const h = 0.6 / n;
      for (let i = 0; i < n; i++) {
        const at = (k: number[], f: number) => state.map((s, j) => s + f * k[j]);
        const k1 = rate(state);
        const k2 = rate(at(k1, h / 2));
        const k3 = rate(at(k2, h / 2));
        const k4 = rate(at(k3, h));
        state = state.map((s, j) => s + (h / 6) * (k1[j] + 2 * k2[j] + 2 * k3[j] + k4[j]));
      }
      expect(last(path.liquid.values('Sr')) / (state[1] / state[0])).toBeCloseTo(1, 9);
      expect(last(path.liquid.values('87Sr/86Sr'))).toBeCloseTo(state[2] / state[1], 9);
    }
  });

  it('is continuous through r + D = 1 and through r = 1', () => {
    const at = (r: number, D: number, x: number) => openSystemLiquid(1, r * 5, D, r - 1, chamberTime(x, r - 1));
    fc.assert(
      fc.property(fc.double({ min: 0.05, max: 0.95, noNaN: true }), fc.double({ min: 0.05, max: 0.9, noNaN: true }), (r, x) => {
        const middle = at(r, 1 - r, x);
        for (const step of [1e-3, 1e-6, 1e-9, 1e-12, 1e-14])
          for (const sign of [-1, 1]) expect(Math.abs(at(r, 1 - r + sign * step, x) / middle - 1)).toBeLessThan(10 * step + 1e-12);
        const one = at(1, r, x);
        for (const step of [1e-3, 1e-6, 1e-9, 1e-12, 1e-14])
          for (const sign of [-1, 1]) expect(Math.abs(at(1 + sign * step, r, x) / one - 1)).toBeLessThan(10 * step + 1e-12);
      }),
      { seed: 6, numRuns: 200 },
    );
  });

  it('conserves mass at every step, and without assimilation is Rayleigh crystallisation', () => {
    const path = assimilate({ from: { Sr: 500 }, assimilant: { Sr: 150 }, r: 0.3, ...bulk(1.5), downTo: 0.4 });
    const [liquid, solids, x, taken] = [
      path.liquid.values('Sr'),
      path.cumulate!.values('Sr'),
      path.liquid.values('crystallised'),
      path.liquid.values('assimilated'),
    ];
    path.F.forEach((F, i) => expect((F * liquid[i] + x[i] * solids[i]) / (500 + taken[i] * 150)).toBeCloseTo(1, 10));
    // The cumulate is also the integral of what crystallised step by step.
    const forming = path.solid!.values('Sr');
    let held = 0;
    for (let i = 1; i < x.length; i++) held += ((forming[i] + forming[i - 1]) / 2) * (x[i] - x[i - 1]);
    expect(held / (last(x) * last(solids))).toBeCloseTo(1, 3);
    const plain = assimilate({ from: { Sr: 500 }, assimilant: { Sr: 150 }, r: 0, ...bulk(1.5), downTo: 0.4 });
    const rayleigh = crystallise({ from: { Sr: 500 }, ...bulk(1.5), downTo: 0.4 });
    plain.liquid.values('Sr').forEach((value, i) => expect(value / rayleigh.liquid.values('Sr')[i]).toBeCloseTo(1, 12));
  });

  it('names what is missing', () => {
    const good = { from: { Sr: 500, '87Sr/86Sr': 0.7035 }, assimilant: { Sr: 150, '87Sr/86Sr': 0.72 }, r: 0.2, ...bulk(1) };
    expect(() => assimilate({ ...good, assimilant: { Ba: 3 }, downTo: 0.5 })).toThrow(/Sr of the assimilant, 87Sr\/86Sr of the assimilant/);
    expect(() => assimilate({ ...good })).toThrow(/either downTo or crystallised/);
    expect(() => assimilate({ ...good, r: 1, downTo: 0.5 })).toThrow(/keeps its mass/);
    expect(() => assimilate({ ...good, r: 1.5, downTo: 0.5 })).toThrow(/downTo is 0.5/);
    expect(() => assimilate({ ...good, crystallised: 2 })).toThrow(/used up at 1.25/);
  });
});

describe('other chambers', () => {
  it('agree with the table of equation values', () => {
    for (const { inputs, value } of equationValues('in-situ crystallisation')) {
      const path = crystalliseInSitu({ from: { Sr: 1 }, ...bulk(inputs.D), downTo: inputs.F, returned: inputs.f, steps: 2 });
      expect(Number(last(path.liquid.values('Sr')).toPrecision(6))).toBe(value);
    }
    for (const { inputs, value } of equationValues('zone refining')) {
      expect(
        Number(last(refineByZones({ from: { Sr: 1 }, ...bulk(inputs.D), volumes: inputs.n, steps: 2 }).liquid.values('Sr')).toPrecision(6)),
      ).toBe(value);
    }
    for (const { inputs, value } of equationValues('RTF steady-state lava')) {
      expect(Number(refilledSteadyState(inputs.D, inputs.x, inputs.y).toPrecision(6))).toBe(value);
      const path = refillChamber({ from: { Sr: 1 }, ...bulk(inputs.D), crystallised: inputs.x, erupted: inputs.y, cycles: 600 });
      expect(Number(last(path.liquid.values('Sr')).toPrecision(6))).toBe(value);
    }
  });

  it('agree with numerical integration', () => {
    // In situ (Langmuir 1989): a zone takes in dM of chamber liquid, a fraction f of it returns with the concentration of the zone's
    // liquid at that degree of crystallisation, E·C, and the chamber shrinks by (1 − f)·dM.
    const [D, f, end] = [0.15, 0.4, 0.3];
    const E = 1 / (D * (1 - f) + f);
    let [mass, amount] = [1, 1];
    const steps = 400_000;
    const dM = (1 - end) / (1 - f) / steps;
    for (let i = 0; i < steps; i++) {
      const C = amount / mass;
      amount += dM * (f * E * C - C);
      mass -= dM * (1 - f);
    }
    expect(last(crystalliseInSitu({ from: { Sr: 1 }, ...bulk(D), downTo: end, returned: f, steps: 1 }).liquid.values('Sr'))).toBeCloseTo(
      amount / mass,
      4,
    );
    // Zone refining: rock of C0 = 1 melts in, D·C crystallises out.
    let C = 1;
    for (let i = 0; i < steps; i++) C += (5 / steps) * (1 - D * C);
    expect(last(refineByZones({ from: { Sr: 1 }, ...bulk(D), volumes: 5, steps: 1 }).liquid.values('Sr'))).toBeCloseTo(C, 4);
  });

  it('change nothing at D = 1', () => {
    const all = [
      crystalliseInSitu({ from: { Sr: 7 }, ...bulk(1), downTo: 0.2, returned: 0.3 }),
      refineByZones({ from: { Sr: 7 }, ...bulk(1), volumes: 9 }),
      refillChamber({ from: { Sr: 7 }, ...bulk(1), crystallised: 0.2, erupted: 0.1 }),
    ];
    for (const path of all) for (const value of path.liquid.values('Sr')) expect(value).toBeCloseTo(7, 10);
  });
});

describe('mix', () => {
  it('gives the mixtures of Sr and Nd isotopes', () => {
    const { inputs, expected } = byKey('model-SrNd-mixing'); // computed independently from Langmuir et al. 1978
    const end = (it: any) => ({ Sr: it.Sr, Nd: it.Nd, '87Sr/86Sr': it.Sr8786, '143Nd/144Nd': it.Nd143144 });
    const path = mix({ components: [end(inputs.A), end(inputs.B)], steps: 20 });
    for (const row of expected) {
      const i = Math.round(row.f_B * 20);
      expect(path.F[i]).toBeCloseTo(row.f_B, 12);
      for (const [symbol, value] of [
        ['Sr', row.Sr],
        ['Nd', row.Nd],
        ['87Sr/86Sr', row.Sr8786],
        ['143Nd/144Nd', row.Nd143144],
      ] as const)
        expect(path.liquid.values(symbol)[i]).toBeCloseTo(value, 10);
    }
    const hyperbola = mixingHyperbola(
      { x: inputs.A.Nd143144, y: inputs.A.Sr8786, b: inputs.A.Nd, a: inputs.A.Sr },
      { x: inputs.B.Nd143144, y: inputs.B.Sr8786, b: inputs.B.Nd, a: inputs.B.Sr },
    );
    expect(hyperbola.curvature).toBeCloseTo(9.3333, 4);
    path.F.forEach((_, i) => {
      const [x, y] = [path.liquid.values('143Nd/144Nd')[i], path.liquid.values('87Sr/86Sr')[i]];
      expect(Math.abs(hyperbola.A * x + hyperbola.B * x * y + hyperbola.C * y + hyperbola.D)).toBeLessThan(1e-9);
    });
  });

  it('fills a triangle with three components and conserves mass', () => {
    const path = mix({
      components: [
        { Ba: 100, SiO2: 50 },
        { Ba: 400, SiO2: 60 },
        { Ba: 900, SiO2: 72 },
      ],
      names: ['a', 'b', 'c'],
      steps: 5,
    });
    expect(path.liquid.size).toBe(21);
    const share = (name: string) => path.liquid.values(`share of ${name}`);
    path.liquid.values('Ba').forEach((value, i) => {
      expect(share('a')[i] + share('b')[i] + share('c')[i]).toBeCloseTo(1, 12);
      expect(value).toBeCloseTo(100 * share('a')[i] + 400 * share('b')[i] + 900 * share('c')[i], 9);
    });
  });

  it('refuses what it cannot mix', () => {
    expect(() => mix({ components: [{ Ba: 1 }] })).toThrow(/two or three/);
    expect(() => mix({ components: [{ '87Sr/86Sr': 0.703 }, { '87Sr/86Sr': 0.71 }] })).toThrow(/without Sr/);
    expect(() => mix({ components: [{ Ba: 1 }, { Sr: 1 }] })).toThrow(/share no analyte/);
    expect(() => mix({ components: [{ Ba: 1 }, { Ba: 2 }], analytes: ['Mg-number'] })).toThrow(/does not mix by mass/);
  });
});
