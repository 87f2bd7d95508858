import { G, Line, Path, Polygon, Rect, Svg } from 'react-native-svg';
import { Drawing } from '@/client/drawings/figure';
import { speedExtremes, speedPath, zeroRange } from '@/client/drawings/speed-line';
import type { SpeedPoint } from '@/client/drawings/speed-line';
import { countText } from '@/client/drawings/count-text';
import { rpmText } from '@/client/drawings/speed-words';
import { durationText } from '@/client/drawings/time-axis';
import { useColours } from '@/client/theme/use-theme';
import type { Finding } from '@/signal/model';

type OverviewProps = {
  durationS: number;
  speed: readonly SpeedPoint[];
  gaps: readonly { from: number; to: number }[];
  findings: readonly Finding[];
  /** What the ribbon shows of it. */
  window: { fromS: number; toS: number } | null;
  cursorS: number | null;
  height?: number;
};

/** The whole capture: speed against time with its zero line, gaps and shaped flags; never a loudness-like envelope. */
export function Overview({ durationS, speed, gaps, findings, window, cursorS, height = 72 }: OverviewProps) {
  const colours = useColours();
  const extremes = speedExtremes(speed);
  const range = zeroRange(extremes ?? { low: 0, high: 1 });
  return (
    <Drawing label={overviewSentence({ durationS, speed, gaps, findings })} height={height}>
      {({ width }) => {
        const x = (t: number) => (t / Math.max(durationS, 1e-9)) * width;
        const y = (rpm: number) => 4 + ((range.high - rpm) / (range.high - range.low)) * (height - 8);
        const left = window ? x(Math.max(0, window.fromS)) : 0;
        const wide = window ? Math.max(6, x(Math.min(durationS, window.toS)) - left) : 0;
        return (
          <Svg width={width} height={height}>
            <Rect
              x={0.5}
              y={4.5}
              width={width - 1}
              height={height - 9}
              fill={colours.plate}
              stroke={colours.hairline}
            />
            <Line
              x1={0}
              x2={width}
              y1={y(0)}
              y2={y(0)}
              stroke={colours.scribeSoft}
              strokeWidth={1}
              strokeDasharray="2 3"
            />
            <Path
              d={speedPath(
                speed,
                x,
                y,
                gaps.map((g) => g.to),
              )}
              fill="none"
              stroke={colours.scribe}
              strokeWidth={1.6}
              strokeLinejoin="round"
            />
            {gaps.map((g) => (
              <Rect
                key={g.from}
                x={x(g.from) - 1}
                y={5}
                width={Math.max(3, x(g.to) - x(g.from) + 2)}
                height={height - 10}
                fill={colours.ground}
                stroke={colours.scribeSoft}
                strokeDasharray="2 2"
              />
            ))}
            {window ? (
              <Rect
                x={Math.min(left, width - 7) + 1}
                y={1}
                width={Math.max(4, wide - 2)}
                height={height - 2}
                fill={colours.band}
                stroke={colours.dye}
                strokeWidth={2}
              />
            ) : null}
            {cursorS === null ? null : (
              <Line
                x1={x(cursorS)}
                x2={x(cursorS)}
                y1={1}
                y2={height - 1}
                stroke={colours.dye}
                strokeWidth={1.5}
              />
            )}
            {findings.map((f, i) => (
              <Flag
                key={i}
                severity={f.severity}
                x={Math.min(width - 9, Math.max(9, x(f.at)))}
                y={height - 14}
              />
            ))}
          </Svg>
        );
      }}
    </Drawing>
  );
}

/** The text alternative of an overview. */
export function overviewSentence({
  durationS,
  speed,
  gaps,
  findings,
}: Pick<OverviewProps, 'durationS' | 'speed' | 'gaps' | 'findings'>): string {
  const extremes = speedExtremes(speed);
  const sentence = extremes
    ? `Speed over ${durationText(durationS)}, from ${rpmText(extremes.low)} to ${rpmText(extremes.high)} rpm`
    : `${durationText(durationS)} without a known speed`;
  return `${sentence}; ${countText(gaps.length, 'gap')}, ${countText(findings.length, 'finding')}.`;
}

function Flag({ severity, x, y }: { severity: Finding['severity']; x: number; y: number }) {
  const colours = useColours();
  const points = shapes[severity]
    .map(([dx, dy]) => `${(x + dx * 8).toFixed(1)},${(y + dy * 8).toFixed(1)}`)
    .join(' ');
  const fill = severity === 'fault' ? colours.fault : severity === 'warn' ? colours.warn : colours.plate;
  return (
    <G>
      <Polygon
        points={points}
        fill={fill}
        stroke={severity === 'note' ? colours.scribeSoft : colours.plate}
        strokeWidth={1.5}
      />
    </G>
  );
}

const shapes: Record<Finding['severity'], readonly (readonly [number, number])[]> = {
  note: [
    [0, -1],
    [1, 0],
    [0, 1],
    [-1, 0],
  ],
  warn: [
    [0, -1],
    [1.05, 0.85],
    [-1.05, 0.85],
  ],
  fault: [
    [-0.42, -1],
    [0.42, -1],
    [1, -0.42],
    [1, 0.42],
    [0.42, 1],
    [-0.42, 1],
    [-1, 0.42],
    [-1, -0.42],
  ],
};
