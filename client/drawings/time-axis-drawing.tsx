import { G, Line } from 'react-native-svg';
import { SvgText } from '@/client/drawings/svg-text';
import { secondsText, timeTicks } from '@/client/drawings/time-axis';
import type { TimeScale } from '@/client/drawings/time-axis';
import type { ColourName } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

type TimeAxisProps = {
  time: TimeScale;
  y: number;
  anchorS?: number;
  rightWord?: string | undefined;
  centreWord?: string | undefined;
  centreTone?: ColourName | undefined;
};

const charPx = 6.9;
/** Below this the ends are labelled instead of round moments: those would not stand beside the word in the middle. */
const narrowPx = 420;

/** Round moments; where a word stands in the middle or at the right edge, the ticks under it keep their line only. */
export function TimeAxis({ time, y, anchorS, rightWord, centreWord, centreTone = 'dye' }: TimeAxisProps) {
  const colours = useColours();
  const left = time.x(time.fromS);
  const right = time.x(time.toS);
  const middle = (left + right) / 2;
  const taken: [number, number][] = [];
  if (rightWord) taken.push([right - rightWord.length * charPx - 8, right + 40]);
  if (centreWord)
    taken.push([
      middle - (centreWord.length * charPx) / 2 - 8,
      middle + (centreWord.length * charPx) / 2 + 8,
    ]);
  const narrow = right - left < narrowPx && centreWord !== undefined;
  if (narrow) taken.push([left - 40, right + 40]);
  const ticks = timeTicks(time.fromS, time.toS, Math.max(2, Math.floor((right - left) / 90)), anchorS);
  return (
    <G>
      {ticks.map(({ s, label }) => {
        const half = (label.length * charPx) / 2;
        const x = Math.min(right - half, Math.max(left + half - 6, time.x(s)));
        const free = taken.every(([from, to]) => x + half < from || x - half > to);
        return (
          <G key={s}>
            <Line
              x1={time.x(s)}
              x2={time.x(s)}
              y1={y - 14}
              y2={y - 9}
              stroke={colours.scribeSoft}
              strokeWidth={1}
            />
            {free ? (
              <SvgText x={x} y={y} anchor="middle">
                {label}
              </SvgText>
            ) : null}
          </G>
        );
      })}
      {narrow ? (
        <EdgeLabels
          time={time}
          y={y}
          anchorS={anchorS}
          bothEnds={!rightWord}
          centrePx={centreWord.length * charPx}
        />
      ) : null}
      {centreWord ? (
        <SvgText x={middle} y={y} anchor="middle" tone={centreTone}>
          {centreWord}
        </SvgText>
      ) : null}
      {rightWord ? (
        <SvgText x={right} y={y} anchor="end">
          {rightWord}
        </SvgText>
      ) : null}
    </G>
  );
}

type EdgeLabelsProps = {
  time: TimeScale;
  y: number;
  anchorS: number | undefined;
  bothEnds: boolean;
  centrePx: number;
};

function EdgeLabels({ time, y, anchorS, bothEnds, centrePx }: EdgeLabelsProps) {
  const { fromS, toS } = time;
  const span = toS - fromS;
  const text = (s: number) =>
    anchorS === undefined
      ? secondsText(s, span / 40, Math.max(1, toS))
      : secondsText(s - anchorS, span / 100, span);
  const room = (time.x(toS) - time.x(fromS) - centrePx) / 2;
  if (text(fromS).length * charPx > room) return null;
  return (
    <G>
      <SvgText x={time.x(fromS) - 6} y={y}>
        {text(fromS)}
      </SvgText>
      {bothEnds ? (
        <SvgText x={time.x(toS) + 6} y={y} anchor="end">
          {text(toS)}
        </SvgText>
      ) : null}
    </G>
  );
}
