import { withoutGaps } from '@/client/drawings/gaps';
import type { Stretch } from '@/client/drawings/gaps';
import type { RibbonLane } from '@/client/drawings/ribbon-types';
import type { TimeScale } from '@/client/drawings/time-axis';

export type BandPaths = {
  /** The strip between release and operate point, as closed shapes. */
  strip: string;
  /** Its two edges. */
  borders: string;
};

/** The hysteresis band within a window, stepped where it moves, cut out where samples were lost. */
export function bandPaths(
  bands: RibbonLane['bands'],
  gaps: readonly Stretch[],
  time: TimeScale,
  y: (volts: number) => number,
): BandPaths {
  let strip = '';
  let borders = '';
  for (const band of bands) {
    const shown = { from: Math.max(band.from, time.fromS), to: Math.min(band.to, time.toS) };
    const [top, bottom] = [y(band.operateV).toFixed(1), y(band.releaseV).toFixed(1)];
    for (const { from, to } of withoutGaps(shown, gaps)) {
      const [x1, x2] = [time.x(from).toFixed(1), time.x(to).toFixed(1)];
      strip += `M${x1} ${top}H${x2}V${bottom}H${x1}Z`;
      borders += `M${x1} ${top}H${x2}M${x1} ${bottom}H${x2}`;
    }
  }
  return { strip, borders };
}
