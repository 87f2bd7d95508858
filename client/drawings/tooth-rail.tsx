import { Circle, G, Line, Path, Rect } from 'react-native-svg';
import { withoutGaps } from '@/client/drawings/gaps';
import { railItems } from '@/client/drawings/rail-marks';
import type { RailDirection, RailItem } from '@/client/drawings/rail-marks';
import type { RibbonData } from '@/client/drawings/ribbon-types';
import { SvgText } from '@/client/drawings/svg-text';
import type { TimeScale } from '@/client/drawings/time-axis';
import { useColours } from '@/client/theme/use-theme';

type ToothRailProps = {
  data: RibbonData;
  word: string;
  time: TimeScale;
  top: number;
  height: number;
  labelX: number;
};

const markPx = 13;

/** Forward up, reverse down, direction unknown across the line; a crossing that was not counted is a hollow ring. */
export function ToothRail({ data, word, time, top, height, labelX }: ToothRailProps) {
  const colours = useColours();
  const y = top + height / 2 + 4;
  const items = railItems(data.edges, data.lanes[0]?.channel, time);
  const inside = (t: number) => t >= time.fromS && t <= time.toS;
  return (
    <G>
      <SvgText x={labelX} y={y} anchor="end">
        {word}
      </SvgText>
      {withoutGaps({ from: time.fromS, to: time.toS }, data.gaps).map((s) => (
        <Line
          key={s.from}
          x1={time.x(s.from)}
          x2={time.x(s.to)}
          y1={y}
          y2={y}
          stroke={colours.hairline}
          strokeWidth={1}
        />
      ))}
      <Marks items={items} y={y} />
      {data.rejected
        .filter((r) => inside(r.t))
        .slice(-200)
        .map((r) => (
          <Circle
            key={`${r.channel}${r.t}`}
            cx={time.x(r.t)}
            cy={y - markPx / 2 - 1}
            r={4.5}
            fill="none"
            stroke={colours.warn}
            strokeWidth={1.75}
          />
        ))}
    </G>
  );
}

function Marks({ items, y }: { items: readonly RailItem[]; y: number }) {
  const colours = useColours();
  const paths: Record<string, string> = {};
  for (const item of items) {
    if (item.kind !== 'mark') continue;
    const [up, down] = reach(item.direction, item.minor ? 6 : markPx);
    const key = `${item.direction}${item.minor ? '-minor' : ''}`;
    paths[key] = `${paths[key] ?? ''}M${item.x.toFixed(1)} ${(y - up).toFixed(1)}V${(y + down).toFixed(1)}`;
  }
  const tone = (direction: RailDirection) => (direction === 'unknown' ? colours.scribe : colours[direction]);
  return (
    <>
      {Object.entries(paths).map(([key, d]) => (
        <Path
          key={key}
          d={d}
          stroke={tone(key.replace('-minor', '') as RailDirection)}
          strokeWidth={key.endsWith('minor') ? 1.5 : 2.5}
        />
      ))}
      {items.map((item) => {
        if (item.kind !== 'strip') return null;
        const [up, down] = reach(item.direction, markPx);
        return (
          <Rect
            key={item.x0}
            x={item.x0 - 1}
            y={y - up}
            width={item.x1 - item.x0 + 2}
            height={up + down}
            fill={tone(item.direction)}
          />
        );
      })}
    </>
  );
}

function reach(direction: RailDirection, px: number): [up: number, down: number] {
  if (direction === 'forward') return [px, 0];
  return direction === 'reverse' ? [0, px] : [px / 2, px / 2];
}
