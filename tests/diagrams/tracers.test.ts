import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';

const { diagrams } = ww;
const keys = ['n-morb-1989', 'e-morb-1989', 'oib-1989', 'subducting-sediment-1998'];
const rocks = ww.reservoirSuite(keys).withLabels({ group: ['A', 'A', 'B', ''] });
const isotopic = ww.reservoirSuite(['depleted-mantle-2005', 'all-morb-2013', 'subducting-sediment-1998']);
const caption = (diagram: ww.diagrams.Diagram) => (diagram.spec.title as { text: string[] }).text.join(' ');

describe('tracer plots', () => {
  it('draw every plot without a warning, all samples in', async () => {
    for (const name of diagrams.tracerPlotNames) {
      const diagram = diagrams.tracerPlot(rocks, name, { group: 'group' });
      expect(diagram.counts, name).toMatchObject({ plotted: 4, notPlotted: 0 });
      expect(diagrams.specWarnings(diagram.spec), name).toEqual([]);
    }
    expect((await diagrams.tracerPlot(rocks, 'thorium-niobium').png()).length).toBeGreaterThan(5000);
  });

  it('name their sources in the figure and the lineage', () => {
    const diagram = diagrams.tracerPlot(rocks, 'cerium-lead');
    expect(caption(diagram)).toContain('Hofmann et al. 1986');
    expect(diagram.lineage.at(-1)!.sources).toEqual(expect.arrayContaining(['hofmann_1986', 'sun_mcdonough_1989', 'plank_langmuir_1998']));
    expect(caption(diagrams.tracerPlot(rocks, 'barium-thorium'))).toContain('normalised to');
  });

  it('take other reservoirs, model paths, and refuse what they do not know', () => {
    const path = ww.mix({ components: [ww.reservoirSuite(['n-morb-1989']), ww.reservoirSuite(['subducting-sediment-1998'])] });
    const diagram = diagrams.tracerPlot(rocks, 'barium-lanthanum', { reservoirs: [], paths: [path] });
    expect(caption(diagram)).not.toContain('Stars');
    expect(() => diagrams.tracerPlot(rocks, 'gold-copper' as never)).toThrow(/no plot "gold-copper"/);
    expect(() => diagrams.tracerPlot(rocks, 'barium-thorium', { reservoirs: ['moon'] })).toThrow(/no reservoir "moon"/);
    expect(() => diagrams.tracerPlot(ww.suiteOf({ columns: [ww.column({ symbol: 'Ba', values: [1] })] }), 'barium-thorium')).toThrow(/needs .*Th/);
  });
});

describe('isotope plots', () => {
  it('draw every plot that the suite allows, ε computed where it is lacking', () => {
    for (const name of diagrams.isotopePlotNames.filter((each) => each !== 'neodymium-hafnium')) {
      const diagram = diagrams.isotopePlot(isotopic, name);
      expect(diagram.counts.plotted, name).toBe(3);
      expect(diagrams.specWarnings(diagram.spec), name).toEqual([]);
    }
    expect(() => diagrams.isotopePlot(isotopic, 'neodymium-hafnium')).toThrow(/needs epsilon-Hf/);
    expect(() => diagrams.isotopePlot(isotopic, 'lead-206' as never)).toThrow(/no plot "lead-206"/);
  });

  it('leave a far reservoir outside the frame unless the whole is asked for', () => {
    const lavas = ww.suiteOf({
      columns: [ww.column({ symbol: '87Sr/86Sr', values: [0.7032, 0.7036] }), ww.column({ symbol: '143Nd/144Nd', values: [0.51306, 0.51288] })],
    });
    expect(caption(diagrams.isotopePlot(lavas, 'strontium-neodymium'))).toMatch(/Outside the frame: .*GLOSS/);
    expect(caption(diagrams.isotopePlot(lavas, 'strontium-neodymium', { window: 'whole' }))).not.toContain('Outside');
  });
});

describe('slab-share bars and the corner diagram', () => {
  it('draw a bar a group and element with its whisker', () => {
    const diagram = diagrams.slabShareBars(rocks, { group: 'group', filter: 'none' });
    expect(diagrams.specWarnings(diagram.spec)).toEqual([]);
    expect(JSON.stringify(diagram.spec)).toContain('"not given"');
    expect(diagrams.slabShareBars(ww.slabShares(rocks, { group: 'group', filter: 'none' })).counts.plotted).toBe(4);
    expect(diagrams.slabShareBars(rocks, { filter: 'none' }).counts.plotted).toBe(4);
    expect(() => diagrams.slabShareBars(rocks, { filter: { Th: { from: 1000 } } })).toThrow(/no group with a sample/);
  });

  it('show every pair of fitted parameters and their correlation', async () => {
    const made = ww.fluxedWedgeMelt({ melt: 0.15, fluid: 0.006, sediment: 0.004 });
    const suite = ww.suiteOf({
      columns: made.elements.map((symbol, e) => ww.column({ symbol, values: [made.melt[e]] })),
      labels: { sample: ['made'] },
    });
    const fit = await ww.fitFluxedWedge(suite, { draws: 60 });
    const diagram = diagrams.wedgeCorner(fit, { name: 'made' });
    expect((diagram.spec.concat as unknown[]).length).toBe(16);
    expect(diagrams.specWarnings(diagram.spec)).toEqual([]);
    expect((JSON.stringify(diagram.spec).match(/r = /g) ?? []).length).toBe(6);
    expect(() => diagrams.wedgeCorner(fit, { name: 'other' })).toThrow(/no fit "other"/);
    const few = await ww.fitFluxedWedge(suite, { draws: 60, elements: ['Ba', 'Th'] });
    expect(() => diagrams.wedgeCorner(few)).toThrow(/no draws/);
  });
});
