import type { Suite } from '../suite';
import type { Diagram } from './diagram';
import { schemeDiagram, type SchemeDiagramOptions } from './scheme';

/**
 * Total alkalis against silica, with the IUGS fields.
 *
 * @param suite n samples with all major oxides in wt %; recast to volatile-free by itself unless it is so already
 * @param options as `scheme`; `also: ['alkalinity']` adds the line between alkaline and subalkaline rocks
 * @throws RangeError for a bad option, or a suite without the oxides
 * @source Le Bas et al. 1986; Le Maitre et al. 2002
 * @example diagrams.tas(suite, { group: 'volcano' })
 */
export function tas(suite: Suite, options: SchemeDiagramOptions = {}): Diagram {
  return schemeDiagram(suite, 'tas', options, { who: 'tas', width: 540, height: 400 });
}

/**
 * Potassium against silica: low-, medium- and high-K fields (IUGS).
 *
 * @param suite n samples with all major oxides in wt %
 * @param options as `scheme`
 * @throws RangeError for a bad option, or a suite without the oxides
 * @source Le Maitre et al. 2002
 * @example diagrams.potassiumSilica(suite, { group: 'volcano' })
 */
export function potassiumSilica(suite: Suite, options: SchemeDiagramOptions = {}): Diagram {
  return schemeDiagram(suite, 'potassium-silica', options, { who: 'potassiumSilica', width: 480, height: 360 });
}

/**
 * FeO* / MgO against silica: tholeiitic and calc-alkalic series.
 *
 * @param suite n samples with all major oxides in wt %
 * @param options as `scheme`
 * @throws RangeError for a bad option, or a suite without the oxides
 * @source Miyashiro 1974
 * @example diagrams.ironEnrichment(suite, { group: 'volcano' })
 */
export function ironEnrichment(suite: Suite, options: SchemeDiagramOptions = {}): Diagram {
  return schemeDiagram(suite, 'iron-enrichment', options, { who: 'ironEnrichment', width: 480, height: 360 });
}

/**
 * The AFM triangle: alkalis, total iron as FeO, magnesia, with the curve between tholeiitic and calc-alkaline rocks.
 *
 * @param suite n samples with all major oxides in wt %
 * @param options as `scheme`; `window` has no effect on a triangle
 * @throws RangeError for a bad option, or a suite without the oxides
 * @source Irvine & Baragar 1971
 * @example diagrams.afm(suite, { group: 'volcano' })
 */
export function afm(suite: Suite, options: SchemeDiagramOptions = {}): Diagram {
  return schemeDiagram(suite, 'afm', options, { who: 'afm', corners: ['M', 'F', 'A'], width: 460 });
}
