import { G, Line, Path } from 'react-native-svg';
import { envelopePaths, isDense } from '@/client/drawings/envelope';
import { withoutGaps } from '@/client/drawings/gaps';
import { spreadLabels, voltsText } from '@/client/drawings/labels';
import { bandPaths } from '@/client/drawings/band-paths';
import { gutterPx, laneY } from '@/client/drawings/ribbon-layout';
import type { LaneBox, RibbonGap } from '@/client/drawings/ribbon-types';
import { SvgText } from '@/client/drawings/svg-text';
import type { TimeScale } from '@/client/drawings/time-axis';
import { tracePaths } from '@/client/drawings/trace';
import type { ColourName } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

/** Of a lane's name, px: its face has letters of one width. */
const nameCharPx = 8.6;

type LaneProps = {
  box: LaneBox;
  time: TimeScale;
  gaps: readonly RibbonGap[];
  hatchId: string;
  last: boolean;
};

/** One channel: name, volts at the left, hatched band, trace. */
export function RibbonLaneDrawing({ box, time, gaps, hatchId, last }: LaneProps) {
  const colours = useColours();
  const { lane, bottom } = box;
  const y = laneY(box);
  const breaks = gaps.map((g) => g.to);
  const { trace, clipped } = tracePaths(
    lane,
    time,
    y,
    { lowV: lane.clipLowV, highV: lane.clipHighV },
    breaks,
  );
  return (
    <G>
      <Band box={box} time={time} gaps={gaps} hatchId={hatchId} />
      {isDense(lane, time, box.range) ? (
        <Envelope box={box} time={time} />
      ) : (
        <Path
          d={trace}
          fill="none"
          stroke={colours.scribe}
          strokeWidth={box.thin ? 1.2 : 1.6}
          strokeLinejoin="round"
          strokeLinecap="round"
        />
      )}
      {clipped ? (
        <Path
          d={clipped}
          fill="none"
          stroke={colours.fault}
          strokeWidth={4}
          strokeLinejoin="round"
          strokeLinecap="round"
        />
      ) : null}
      {last ? null : <Separator time={time} gaps={gaps} y={bottom} />}
      <SvgText x={0} y={box.top + (box.thin ? (box.bottom - box.top) / 2 : 10)} tone="scribe" size={14} code>
        {lane.channel}
      </SvgText>
      {box.thin ? null : (
        <>
          <SvgText x={lane.channel.length * nameCharPx + 8} y={box.top + 10}>
            volts
          </SvgText>
          <VoltLabels box={box} y={y} />
        </>
      )}
    </G>
  );
}

/** Teeth too close to tell apart: a surface through which the band can be seen. */
function Envelope({ box, time }: { box: LaneBox; time: TimeScale }) {
  const colours = useColours();
  const { fill, outline } = envelopePaths(box.lane, time, laneY(box));
  return (
    <>
      <Path d={fill} fill={colours.scribe} fillOpacity={0.22} />
      <Path d={outline} fill="none" stroke={colours.scribe} strokeWidth={1.2} strokeLinejoin="round" />
    </>
  );
}

function Separator({ time, gaps, y }: { time: TimeScale; gaps: readonly RibbonGap[]; y: number }) {
  const colours = useColours();
  return withoutGaps({ from: time.fromS, to: time.toS }, gaps).map((s) => (
    <Line
      key={s.from}
      x1={time.x(s.from)}
      x2={time.x(s.to)}
      y1={y}
      y2={y}
      stroke={colours.hairline}
      strokeWidth={1}
    />
  ));
}

function Band({ box, time, gaps, hatchId }: Omit<LaneProps, 'last'>) {
  const colours = useColours();
  const { strip, borders } = bandPaths(box.lane.bands, gaps, time, laneY(box));
  return (
    <>
      <Path d={strip} fill={colours.band} />
      <Path d={strip} fill={`url(#${hatchId})`} />
      <Path d={borders} fill="none" stroke={colours.dye} strokeWidth={1.4} />
    </>
  );
}

function VoltLabels({ box, y }: { box: LaneBox; y: (volts: number) => number }) {
  const { lane, range } = box;
  const band = lane.bands.at(-1);
  const span = range.highV - range.lowV;
  const levels: { volts: number | null | undefined; tone: ColourName }[] = [
    { volts: band?.operateV, tone: 'dye' },
    { volts: band?.releaseV, tone: 'dye' },
    { volts: lane.highV, tone: 'scribeSoft' },
    { volts: lane.lowV, tone: 'scribeSoft' },
  ];
  const wanted = levels.flatMap(({ volts, tone }) =>
    volts == null ? [] : [{ y: y(volts), text: voltsText(volts, span), tone }],
  );
  return (
    <>
      {spreadLabels(wanted, 14, box.traceTop + 4, box.traceBottom - 2).map((label) => (
        <SvgText key={`${label.text}${label.y}`} x={gutterPx - 8} y={label.y} tone={label.tone} anchor="end">
          {label.text}
        </SvgText>
      ))}
    </>
  );
}
