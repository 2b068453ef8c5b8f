import { labelUnit, type Layer } from '../layer';
import { inWindow, isDrawable, toPixels } from '../frame';
import { textSize } from '../theme';
import type { SamplePoints } from './samples';

/** Names written beside their samples, where there is room; those that find none are left to the tooltip. */
export function namesLayer({ x, y }: SamplePoints, samples: readonly string[], wanted: readonly string[] | 'all'): Layer {
  const asked = wanted === 'all' ? undefined : new Set(wanted);
  return {
    labelRank: 1,
    draw({ frame, placer }) {
      const style = { size: textSize.note - 1 };
      const labels = samples.flatMap((name, i) => {
        if ((asked !== undefined && !asked.has(name)) || !isDrawable(frame, x[i], y[i]) || !inWindow(frame, x[i], y[i])) return [];
        return placer.placeBeside([toPixels(frame, [x[i], y[i]])], [name], style, 5) ?? [];
      });
      return labels.length === 0 ? [] : [labelUnit(frame, labels, { fontSize: style.size })];
    },
  };
}
