import { G, Line, Path } from 'react-native-svg';
import { gutterPx } from '@/client/drawings/ribbon-layout';
import { speedLabels, speedPath, zeroRange } from '@/client/drawings/speed-line';
import type { SpeedPoint, SpeedRange } from '@/client/drawings/speed-line';
import { SvgText } from '@/client/drawings/svg-text';
import type { TimeScale } from '@/client/drawings/time-axis';
import { aroundWindow } from '@/client/screens/replay/replay-data';
import { useColours } from '@/client/theme/use-theme';

type SpeedLaneProps = {
  speed: readonly SpeedPoint[];
  /** Lowest and highest of the whole capture, so that the lane stands still while the window moves. */
  extremes: SpeedRange | null;
  gaps: readonly { from: number; to: number }[];
  time: TimeScale;
  top: number;
  height: number;
};

/** Speed under the rail, on the same time axis, with its zero line. */
export function SpeedLane({ speed, extremes, gaps, time, top, height }: SpeedLaneProps) {
  const colours = useColours();
  const range = zeroRange(extremes ?? { low: 0, high: 1 });
  const left = time.x(time.fromS);
  const right = time.x(time.toS);
  const y = (rpm: number) => top + 4 + ((range.high - rpm) / (range.high - range.low)) * (height - 8);
  const zero = y(0);
  const x = (t: number) => Math.min(right, Math.max(left, time.x(t)));
  const d = speedPath(
    aroundWindow(speed, time),
    x,
    y,
    gaps.map((g) => g.to),
  );
  const labels = speedLabels(extremes, y, top + 7, top + height - 7);
  return (
    <G>
      {labels.map((label) => (
        <SvgText key={label.text} x={gutterPx - 8} y={label.y} anchor="end">
          {label.text}
        </SvgText>
      ))}
      <Line x1={left} x2={right} y1={zero} y2={zero} stroke={colours.hairline} strokeWidth={1} />
      <Path d={d} fill="none" stroke={colours.scribe} strokeWidth={1.8} strokeLinejoin="round" />
    </G>
  );
}
