import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';
import { seededRandom } from '../../kernel-lib/chemistry';

const members = ww.wedgeEndMembers();

/** Lavas made by the forward model with known parameters and multiplicative noise. */
function madeLavas(count: number, noise: number, seed: number) {
  const random = seededRandom(seed, 'test');
  const truth = Array.from({ length: count }, () => ({
    melt: 0.06 + 0.16 * random.uniform(),
    fluid: 0.002 + 0.02 * random.uniform(),
    sediment: 0.001 + 0.02 * random.uniform(),
    priorMelt: 0.03 * random.uniform(),
  }));
  const values = members.elements.map(() => new Float64Array(count));
  truth.forEach((parameters, i) => {
    const { melt } = ww.fluxedWedgeMelt(parameters, { endMembers: members });
    melt.forEach((ppm, e) => (values[e][i] = ppm * Math.exp(noise * random.normal())));
  });
  return { truth, suite: ww.suiteOf({ columns: members.elements.map((symbol, e) => ww.column({ symbol, values: values[e] })) }) };
}

describe('end members of the wedge', () => {
  it('carry the published numbers through the stated equations', () => {
    const at = members.elements.indexOf('Ba');
    expect(members.mantle[at]).toBe(0.563); // Workman & Hart 2005, from memory
    // N-MORB Ba 6.3 (Sun & McDonough 1989); D 0.0065 (Kessel et al. 2005 in Eiler et al. 2007, table S6), 1 % rutile holds none; 5 % fluid
    expect(members.fluid[at]).toBeCloseTo(6.3 / (0.0065 * 0.99 + 0.05 * (1 - 0.0065 * 0.99)), 8);
    // GLOSS Ba 776 (Plank & Langmuir 1998); D 0.029 (Xiong 2006 with rutile); 20 % melt
    expect(members.sedimentMelt[at]).toBeCloseTo(776 / (0.029 + 0.2 * 0.971), 8);
    // McKenzie & O'Nions 1991 coefficients, mode of Johnson et al. 1990: 0.55·0.0003 + 0.25·0.0001 + 0.18·0.0005
    expect(members.melting.spinel.startD[at]).toBeCloseTo(0.00028, 10);
    expect(members.melting.spinel.holdsTo).toBeCloseTo(0.18 / 0.68, 10);
  });

  it('hold Nb back in the slab with rutile, and not without', () => {
    const bare = ww.wedgeEndMembers({ fluidResidue: 'eclogite' });
    const nb = members.elements.indexOf('Nb');
    expect(bare.fluid[nb] / members.fluid[nb]).toBeGreaterThan(10);
  });

  it('can all be replaced', () => {
    const own = { Ba: 4000, Th: 1, Nb: 0.5, Yb: 0.3, La: 30 };
    const coefficients = { Ba: 0.001, Th: 0.001, Nb: 0.003, Yb: 0.1, La: 0.01 };
    const mine = ww.wedgeEndMembers({
      elements: Object.keys(own),
      fluid: own,
      sedimentMelt: 'subducting-sediment-2014' as never,
      mantle: 'depleted-mantle-2004',
      mantleCoefficients: coefficients,
    });
    expect([...mine.fluid]).toEqual(Object.values(own));
    expect(mine.sedimentMelt[0]).toBe(786); // GLOSS-II Ba, Plank 2014, from memory
    expect([...mine.melting.garnet.startD]).toEqual(Object.values(coefficients));
  });

  it('refuse what they cannot use', () => {
    expect(() => ww.wedgeEndMembers({ elements: ['Ba', 'Ni'] })).toThrow(/has no Ni/);
    expect(() => ww.wedgeEndMembers({ fluidFraction: 0 })).toThrow(/fluidFraction is 0/);
    expect(() => ww.wedgeEndMembers({ fluidCoefficients: 'nobody_1900' })).toThrow(/no slab coefficients of "nobody_1900"/);
    expect(() => ww.wedgeEndMembers({ mantle: 'nowhere' })).toThrow(/no reservoir "nowhere"/);
    expect(() => ww.wedgeEndMembers({ fluidResidue: 'sand' as never })).toThrow(/fluidResidue/);
    expect(() => ww.wedgeEndMembers({ elements: ['Ba'], mantleCoefficients: { Ba: -1 } })).toThrow(/positive/);
  });
});

describe('forward model', () => {
  it('is the plain batch melt of the mantle when nothing is added', () => {
    const { melt, fromWedge } = ww.fluxedWedgeMelt({ melt: 0.1, fluid: 0, sediment: 0 });
    members.elements.forEach((_, e) => {
      expect(melt[e]).toBeCloseTo(members.mantle[e] * ww.batchMelt(members.melting.spinel.startD[e], members.melting.spinel.reactionD[e], 0.1), 10);
      expect(fromWedge[e]).toBe(1);
    });
  });

  it('melts the residue of prior melting with the coefficients of what is left', () => {
    const { startD, reactionD } = members.melting.spinel;
    const { melt } = ww.fluxedWedgeMelt({ melt: 0.1, fluid: 0, sediment: 0, priorMelt: 0.02 });
    const e = members.elements.indexOf('Yb');
    const left = members.mantle[e] * ww.fractionalResidue(startD[e], reactionD[e], 0.02);
    expect(melt[e]).toBeCloseTo(left * ww.batchMelt((startD[e] - reactionD[e] * 0.02) / 0.98, reactionD[e], 0.1), 10);
  });

  it('accounts for every element, and warns where a phase is used up', () => {
    const result = ww.fluxedWedgeMelt({ melt: 0.3, fluid: 0.01, sediment: 0.02 }, { facies: 'garnet', style: 'pooled-fractional' });
    result.elements.forEach((_, e) => expect(result.fromWedge[e] + result.fromFluid[e] + result.fromSediment[e]).toBeCloseTo(1, 12));
    expect(result.notes[0]).toMatch(/used up/);
    expect(() => ww.fluxedWedgeMelt({ melt: 1.2, fluid: 0, sediment: 0 })).toThrow(/melt is 1.2/);
    expect(() => ww.fluxedWedgeMelt({ melt: 0.1, fluid: 0.6, sediment: 0.5 })).toThrow(/below 1/);
    expect(() => ww.fluxedWedgeMelt({ melt: 0.1, fluid: 0, sediment: 0 }, { facies: 'plagioclase' as never })).toThrow(/facies/);
  });
});

describe('inverse model', () => {
  it('recovers 200 made lavas with 5 % noise: the truth lies in the 95 % interval in 90–98 % of cases', async () => {
    const { truth, suite } = madeLavas(200, 0.05, 7);
    const { fits } = await ww.fitFluxedWedge(suite, { endMembers: members, draws: 200 });
    for (const name of ['melt', 'fluid', 'sediment'] as const) {
      const inside = fits.filter(({ parameters }, i) => truth[i][name] >= parameters[name].low && truth[i][name] <= parameters[name].high).length;
      expect(inside, name).toBeGreaterThanOrEqual(180);
      expect(inside, name).toBeLessThanOrEqual(196);
      expect(fits.filter(({ parameters }) => parameters[name].status === 'resolved').length, name).toBeGreaterThan(180);
    }
    const mean = fits.reduce((sum, { chiSquare, degreesOfFreedom }) => sum + chiSquare / degreesOfFreedom, 0) / fits.length;
    expect(mean).toBeGreaterThan(0.85);
    expect(mean).toBeLessThan(1.15);
  }, 60_000);

  it('finds noiseless parameters exactly', async () => {
    const { truth, suite } = madeLavas(3, 0, 11);
    const { fits } = await ww.fitFluxedWedge(suite, { endMembers: members, draws: 50 });
    fits.forEach(({ parameters, chiSquare }, i) => {
      expect(chiSquare).toBeLessThan(1e-3);
      for (const name of ['melt', 'fluid', 'sediment'] as const) expect(parameters[name].value / truth[i][name]).toBeCloseTo(1, 2);
    });
  });

  it('says "not resolvable" as elements are taken away', async () => {
    const { suite } = madeLavas(8, 0.05, 3);
    const fewer = async (elements: readonly string[]) => (await ww.fitFluxedWedge(suite, { endMembers: members, elements, draws: 100 })).fits;
    const resolved = (fits: readonly ww.OneWedgeFit[]) =>
      fits.flatMap(({ parameters }) => ww.wedgeParameterNames.filter((name) => parameters[name].status === 'resolved')).length;
    const all = resolved(await fewer(members.elements));
    const some = resolved(await fewer(['Ba', 'Th', 'La', 'U', 'Nb']));
    expect(some).toBeLessThan(all / 3);
    for (const fit of await fewer(['Ba', 'Th', 'La', 'U', 'Nb'])) expect(fit.parameters.melt.status).toBe('not resolvable');
    for (const fit of await fewer(['Ba', 'Th', 'La'])) {
      expect(fit.verdict).toMatch(/Not resolvable: 3 usable elements for 4 parameters/);
      expect(fit.parameters.fluid.value).toBeNaN();
    }
  });

  it('gives the same numbers for the same seed, and others for another', async () => {
    const { suite } = madeLavas(1, 0.05, 5);
    const run = async (seed: number) => (await ww.fitFluxedWedge(suite, { endMembers: members, draws: 60, seed })).fits[0];
    const [a, b, c] = [await run(4), await run(4), await run(5)];
    expect(a.draws).toEqual(b.draws);
    expect(a.draws[0]).not.toEqual(c.draws[0]);
    expect(a.parameters.melt.value).toBeCloseTo(c.parameters.melt.value, 4);
  });

  it('fits group medians, names what it could not use, and says when the model does not fit', async () => {
    const made = madeLavas(1, 0, 9).suite;
    const random = seededRandom(2, 'test');
    const six = made.rows([0, 0, 0, 0, 0, 0]);
    const suite = six.with(
      members.elements.map((symbol) => ww.column({ symbol, values: six.values(symbol).map((value) => value * Math.exp(0.03 * random.normal())) })),
    );
    const spoiled = suite
      .with([
        ww.column({ symbol: 'Nb', values: suite.values('Nb').map((value) => 6 * value) }),
        ww.column({ symbol: 'Pb', values: new Float64Array(6).fill(NaN) }),
      ])
      .withLabels({ volcano: ['A', 'A', 'A', 'B', 'B', 'B'] });
    const { fits, lineage } = await ww.fitFluxedWedge(spoiled, { group: 'volcano', endMembers: members, draws: 60, fixed: { priorMelt: 0 } });
    expect(fits.map(({ name, samples }) => [name, samples])).toEqual([
      ['A', 3],
      ['B', 3],
    ]);
    expect(fits[0].unused).toEqual(['Pb']);
    expect(fits[0].fitted).toEqual(['melt', 'fluid', 'sediment']);
    expect(fits[0].widened).toBeGreaterThan(1.5);
    expect(fits[0].verdict).toMatch(/Misfit beyond the errors \(worst Nb/);
    expect(lineage[lineage.length - 1].detail.seed).toBe(1);
  });

  it('reports progress and can be interrupted', async () => {
    const { suite } = madeLavas(2, 0.05, 13);
    const seen: number[] = [];
    await ww.fitFluxedWedge(suite, { endMembers: members, draws: 60, progress: (done, total) => seen.push(done / total) });
    expect(seen[seen.length - 1]).toBe(1);
    expect([...seen].sort((a, b) => a - b)).toEqual(seen);
    const stop = new AbortController();
    const running = ww.fitFluxedWedge(suite, { endMembers: members, draws: 100_000, signal: stop.signal });
    setTimeout(() => stop.abort(), 30);
    const before = performance.now();
    await expect(running).rejects.toThrow(/abort/i);
    expect(performance.now() - before).toBeLessThan(2000);
  });

  it('refuses bad options in words', async () => {
    const { suite } = madeLavas(1, 0, 1);
    const refused = async (options: object, words: RegExp) => expect(ww.fitFluxedWedge(suite, options)).rejects.toThrow(words);
    await refused({ draws: 5 }, /draws is 5/);
    await refused({ seed: 0.5 }, /seed/);
    await refused({ error: 0 }, /error is 0/);
    await refused({ elements: ['Xe'] }, /no Xe/);
    await refused({ fixed: { water: 1 } }, /fixed names "water"/);
    await refused({ bounds: { fluid: [0.2, 0.1] } }, /bounds of fluid/);
    await refused({ fixed: { melt: 0.1, fluid: 0, sediment: 0, priorMelt: 0 } }, /nothing to fit/);
    await refused({ group: 'island' }, /no label "island"/);
  });
});
