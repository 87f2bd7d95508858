import { G, Path, Rect } from 'react-native-svg';
import { tornEdge } from '@/client/drawings/gaps';
import type { RibbonGap } from '@/client/drawings/ribbon-types';
import { SvgText } from '@/client/drawings/svg-text';
import { durationText } from '@/client/drawings/time-axis';
import type { TimeScale } from '@/client/drawings/time-axis';
import { useColours } from '@/client/theme/use-theme';

type TornGapsProps = { gaps: readonly RibbonGap[]; time: TimeScale; bottom: number; railY: number };

const labelRoomPx = 96;

/** Where samples were lost: a torn edge at either side, nothing inside but its length; too narrow: the length on the rail. */
export function TornGaps({ gaps, time, bottom, railY }: TornGapsProps) {
  const colours = useColours();
  const left = time.x(time.fromS);
  const right = time.x(time.toS);
  return (
    <>
      {gaps.map((gap) => {
        const x1 = Math.max(left, time.x(gap.from));
        const x2 = Math.min(right, time.x(gap.to));
        if (x2 < left || x1 > right) return null;
        const text = `${gap.estimated ? 'about ' : ''}${durationText(gap.to - gap.from)} lost`;
        const wide = x2 - x1 >= labelRoomPx;
        const middle = Math.min(right - 44, Math.max(left + 44, (x1 + x2) / 2));
        return (
          <G key={gap.from}>
            {wide ? null : <Rect x={middle - 44} y={railY - 9} width={88} height={18} fill={colours.plate} />}
            {gap.from >= time.fromS ? (
              <Path d={tornEdge(x1, 4, bottom)} fill="none" stroke={colours.scribeSoft} strokeWidth={1.2} />
            ) : null}
            {gap.to <= time.toS ? (
              <Path
                d={tornEdge(Math.max(x2, x1 + 4), 4, bottom)}
                fill="none"
                stroke={colours.scribeSoft}
                strokeWidth={1.2}
              />
            ) : null}
            <SvgText x={middle} y={wide ? bottom / 2 : railY} anchor="middle">
              {text}
            </SvgText>
          </G>
        );
      })}
    </>
  );
}
