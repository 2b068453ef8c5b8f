import { describe, expect, it } from 'vitest';
import { crystallise, spreadOfPath } from 'wedgework';

const options = {
  from: { Sr: 500, Ba: 200, Zr: 70 },
  assemblage: { olivine: 0.2, clinopyroxene: 0.3, plagioclase: 0.5 },
  downTo: 0.5,
  steps: 10,
  draws: 800,
} as const;

describe('spreadOfPath', () => {
  it('spans the path of the preferred coefficients, and is exact when nothing is uncertain', async () => {
    const spread = await spreadOfPath(options);
    const path = crystallise(options);
    for (const symbol of ['Sr', 'Ba', 'Zr']) {
      path.F.forEach((_, i) => {
        expect(spread.low.values(symbol)[i]).toBeLessThan(path.liquid.values(symbol)[i]);
        expect(spread.high.values(symbol)[i]).toBeGreaterThan(path.liquid.values(symbol)[i]);
      });
    }
    const known = await spreadOfPath({
      ...options,
      assemblage: { bulk: 1 },
      coefficients: { bulk: { Sr: 1.2, Ba: 0.1, Zr: 0.1 } },
      startError: 0,
      shareError: 0,
      leastSpread: 0,
      draws: 20,
    });
    const exact = crystallise({ ...options, assemblage: { bulk: 1 }, coefficients: { bulk: { Sr: 1.2, Ba: 0.1, Zr: 0.1 } } });
    known.median.values('Sr').forEach((value, i) => expect(value).toBeCloseTo(exact.liquid.values('Sr')[i], 9));
  });

  it('has the spread of the start where that alone is uncertain', async () => {
    const spread = await spreadOfPath({
      ...options,
      assemblage: { bulk: 1 },
      coefficients: { bulk: { Sr: 1.2, Ba: 0.1, Zr: 0.1 } },
      startError: 0.1,
      shareError: 0,
      leastSpread: 0,
      draws: 5000,
    });
    // 95 % of a normal lies within 1.96 σ.
    expect(Math.log(spread.high.values('Sr')[10] / spread.low.values('Sr')[10]) / (2 * 1.96 * 0.1)).toBeCloseTo(1, 1);
  });

  it('gives the same for the same seed, reports progress, and stops when told to', async () => {
    const [a, b, c] = await Promise.all([spreadOfPath(options), spreadOfPath(options), spreadOfPath({ ...options, seed: 2 })]);
    expect(a.median.values('Sr')).toEqual(b.median.values('Sr'));
    expect(a.median.values('Sr')).not.toEqual(c.median.values('Sr'));
    const seen: number[] = [];
    await spreadOfPath({ ...options, draws: 50_000, progress: (done, total) => seen.push(done / total) });
    expect(seen.length).toBeGreaterThan(1);
    expect(seen.at(-1)).toBe(1);
    const stop = new AbortController();
    const running = spreadOfPath({ ...options, draws: 100_000, signal: stop.signal, progress: () => stop.abort() });
    await expect(running).rejects.toThrow(/abort/i);
  });

  it('refuses bad arguments by name', async () => {
    await expect(spreadOfPath({ ...options, draws: 3 })).rejects.toThrow(/draws is 3/);
    await expect(spreadOfPath({ ...options, leastSpread: 2 })).rejects.toThrow(/leastSpread is 2/);
    await expect(spreadOfPath({ ...options, mode: 'batch' as never })).rejects.toThrow(/mode must be/);
  });
});
