import { useId, useState } from 'react';
import type { ReactNode } from 'react';
import { Defs, G, Line, Pattern, Svg } from 'react-native-svg';
import { Drawing } from '@/client/drawings/figure';
import { RibbonLaneDrawing } from '@/client/drawings/ribbon-lane';
import {
  axisPx,
  gutterPx,
  keepRanges,
  railPx,
  ribbonSentence,
  rightPx,
  stackLanes,
} from '@/client/drawings/ribbon-layout';
import type { RibbonData } from '@/client/drawings/ribbon-types';
import type { Size } from '@/client/drawings/use-size';
import { durationText, timeScale } from '@/client/drawings/time-axis';
import type { TimeScale } from '@/client/drawings/time-axis';
import { TimeAxis } from '@/client/drawings/time-axis-drawing';
import { ToothRail } from '@/client/drawings/tooth-rail';
import { TornGaps } from '@/client/drawings/torn-gaps';
import type { Range } from '@/client/drawings/trace';
import type { ColourName } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

export type RibbonProps = {
  data: RibbonData;
  /** What its marks are: "teeth". */
  positions?: string;
  height: number | 'fill';
  /** Live: labels count back from here, and `rightWord` stands there. */
  anchorS?: number;
  rightWord?: string;
  /** In the middle of the axis: how the picture stands, or the cursor. */
  centreWord?: string;
  centreTone?: ColourName;
  /** The lane that gets the room; the others are thin. */
  focus?: string | null;
  /** An instant to point at. */
  markS?: number | null;
  /** Room of so many px between rail and axis, drawn by `extra` (the speed lane). */
  extraPx?: number;
  extra?: (time: TimeScale, top: number) => ReactNode;
  label?: string;
};

/** The signal in time: lanes stacked, never overlaid, over one rail and one true time axis. */
export function Ribbon(props: RibbonProps) {
  const { data, height, label } = props;
  return (
    <Drawing label={label ?? ribbonSentence(data, durationText(data.toS - data.fromS))} height={height}>
      {(size) => <RibbonDrawing {...props} size={size} />}
    </Drawing>
  );
}

function RibbonDrawing({
  data,
  positions = 'teeth',
  size,
  anchorS,
  rightWord,
  centreWord,
  centreTone,
  focus = null,
  markS,
  extraPx = 0,
  extra,
}: RibbonProps & { size: Size }) {
  const colours = useColours();
  const hatchId = `hatch${useId().replace(/\W/g, '')}`;
  const [ranges] = useState(() => new Map<string, Range>());
  const time = timeScale(data.fromS, data.toS, gutterPx, size.width - rightPx);
  const lanesHeight = Math.max(60, size.height - railPx - axisPx - extraPx);
  const boxes = stackLanes(data.lanes, lanesHeight, focus, (lane) => keepRanges(ranges, lane));
  const markX = markS == null ? null : time.x(markS);
  return (
    <Svg width={size.width} height={size.height}>
      <Defs>
        <Pattern
          id={hatchId}
          patternUnits="userSpaceOnUse"
          width={9}
          height={9}
          patternTransform="rotate(45)"
        >
          <Line x1={0} x2={0} y1={0} y2={9} stroke={colours.dye} strokeWidth={1} strokeOpacity={0.6} />
        </Pattern>
      </Defs>
      {boxes.map((box, i) => (
        <RibbonLaneDrawing
          key={box.lane.channel}
          box={box}
          time={time}
          gaps={data.gaps}
          hatchId={hatchId}
          last={i === boxes.length - 1}
        />
      ))}
      <ToothRail
        data={data}
        // The gutter holds one short word.
        word={positions.split(' ').at(-1)!}
        time={time}
        top={lanesHeight}
        height={railPx}
        labelX={gutterPx - 8}
      />
      <TornGaps gaps={data.gaps} time={time} bottom={lanesHeight} railY={lanesHeight + railPx / 2 - 3} />
      {extra ? extra(time, lanesHeight + railPx) : null}
      <TimeAxis
        time={time}
        y={size.height - axisPx / 2}
        {...(anchorS === undefined ? {} : { anchorS })}
        rightWord={rightWord}
        centreWord={centreWord}
        centreTone={centreTone}
      />
      {markX !== null && markX >= gutterPx - 1 && markX <= size.width - rightPx + 1 ? (
        <G>
          <Line
            x1={markX}
            x2={markX}
            y1={2}
            y2={size.height - axisPx}
            stroke={colours.dye}
            strokeWidth={2}
            strokeDasharray="5 4"
          />
        </G>
      ) : null}
    </Svg>
  );
}
