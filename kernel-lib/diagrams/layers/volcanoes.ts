import { inWindow, toPixels } from '../frame';
import { specNumber, unit, type Layer } from '../layer';
import { ink, textSize } from '../theme';
import { haloedLabels } from './contours';

/** One volcano on a map or a section. */
export interface VolcanoMark {
  readonly name: string;
  readonly x: number;
  readonly y: number;
  readonly samples: number;
  /** What colours it. */
  readonly value?: number;
}

/** Volcanoes as triangles with their names, in one colour or coloured by a value (viridis; open where there is none). */
export function volcanoesLayer(
  marks: readonly VolcanoMark[],
  options: { readonly names: readonly string[] | 'all'; readonly valueTitle?: string; readonly above?: boolean },
): Layer {
  const { names, valueTitle, above = false } = options;
  const asked = names === 'all' ? undefined : new Set(names);
  return {
    labelRank: 0,
    claim({ frame, placer }) {
      for (const { x, y } of marks) {
        const [px, py] = toPixels(frame, [x, y]);
        placer.avoidBox({ left: px - 5, right: px + 5, top: py - 5, bottom: py + 5 });
      }
    },
    draw(canvas) {
      const { frame, placer } = canvas;
      const shown = marks.filter(({ x, y }) => inWindow(frame, x, y));
      const rows = shown.map(({ name, x, y, samples, value }) => ({
        x: specNumber(x),
        y: specNumber(y),
        name,
        samples,
        ...(value === undefined || !Number.isFinite(value) ? {} : { v: specNumber(value) }),
      }));
      const tooltip = [
        { field: 'name', type: 'nominal', title: 'volcano' },
        { field: 'samples', type: 'quantitative', title: 'samples' },
        ...(valueTitle === undefined ? [] : [{ field: 'v', type: 'quantitative', title: valueTitle, format: '.4~g' }]),
      ];
      const fill =
        valueTitle === undefined
          ? { value: '#D55E00' }
          : {
              condition: {
                test: 'isValid(datum.v)',
                field: 'v',
                type: 'quantitative',
                scale: { scheme: 'viridis', zero: false, nice: false },
                legend: { title: valueTitle, gradientLength: 130, gradientThickness: 12, tickCount: 4 },
              },
              value: ink.ground,
            };
      const triangles = unit(
        frame,
        {
          type: 'point',
          shape: 'triangle-up',
          size: 150,
          stroke: ink.text,
          strokeWidth: 0.9,
          strokeOpacity: 1,
          fillOpacity: 1,
          opacity: 1,
          clip: !above,
        },
        rows,
        { fill, tooltip },
      );
      const labels = shown.flatMap(({ name, x, y }) =>
        asked !== undefined && !asked.has(name) ? [] : (placer.placeBeside([toPixels(frame, [x, y])], [name], { size: textSize.note }, 9) ?? []),
      );
      return [triangles, ...haloedLabels(canvas, labels, { fontSize: textSize.note })];
    },
  };
}
