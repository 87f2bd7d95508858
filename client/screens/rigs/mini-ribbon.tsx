import { Line, Path, Rect, Svg } from 'react-native-svg';
import type { Rig } from '@/server/contract';
import { Drawing } from '@/client/drawings/figure';
import { timeScale } from '@/client/drawings/time-axis';
import { calmColumns, tracePaths, wantedRange } from '@/client/drawings/trace';
import { ribbonDataOf } from '@/client/screens/watch/live-data';
import type { LiveRigView } from '@/client/data/use-live';
import { useColours } from '@/client/theme/use-theme';

/** Enough for a card on a phone; finer would only cost. */
export const miniWish = { columns: 240, teeth: 5 };

const noClip = { lowV: null, highV: null };

type MiniRibbonProps = { rig: Rig; view: LiveRigView; height: number; live: boolean };

/** The last teeth, small: one lane a channel with its band, no figures. Faded while it is not live. */
export function MiniRibbon({ rig, view, height, live }: MiniRibbonProps) {
  const colours = useColours();
  const ribbon = view.frame?.ribbon ?? null;
  const label = ribbon
    ? `Last teeth of ${rig.name}${live ? '' : ', no longer live'}`
    : `No signal of ${rig.name}`;
  return (
    <Drawing label={label} height={height} style={{ opacity: live ? 1 : 0.45 }}>
      {({ width }) => {
        if (!ribbon) {
          const middle = height / 2;
          return (
            <Svg width={width} height={height}>
              <Line
                x1={0}
                x2={width}
                y1={middle}
                y2={middle}
                stroke={colours.hairline}
                strokeDasharray="4 4"
              />
            </Svg>
          );
        }
        const data = ribbonDataOf(ribbon);
        const time = timeScale(data.fromS, data.toS, 0, width);
        const laneHeight = height / Math.max(1, data.lanes.length);
        return (
          <Svg width={width} height={height}>
            {data.lanes.map((lane, i) => {
              const [band] = lane.bands;
              const range = wantedRange(lane, [lane.lowV, lane.highV]);
              const top = i * laneHeight + 3;
              const y = (v: number) =>
                top + ((range.highV - v) / (range.highV - range.lowV)) * (laneHeight - 6);
              // A switching sensor stands at the rails by its nature.
              const kind = rig.channels.find((c) => c.name === lane.channel)?.sensor.kind;
              const clip = kind === 'linear' ? { lowV: lane.clipLowV, highV: lane.clipHighV } : noClip;
              const { trace, clipped } = tracePaths(calmColumns(lane, range, clip), time, y, clip);
              return [
                band ? (
                  <Rect
                    key={`${lane.channel} band`}
                    x={0}
                    width={width}
                    y={y(band.operateV)}
                    height={Math.max(1, y(band.releaseV) - y(band.operateV))}
                    fill={colours.band}
                  />
                ) : null,
                <Path
                  key={lane.channel}
                  d={trace}
                  fill="none"
                  stroke={colours.scribe}
                  strokeWidth={1.5}
                  strokeLinejoin="round"
                />,
                clipped ? (
                  <Path
                    key={`${lane.channel} clip`}
                    d={clipped}
                    fill="none"
                    stroke={colours.fault}
                    strokeWidth={3}
                  />
                ) : null,
              ];
            })}
          </Svg>
        );
      }}
    </Drawing>
  );
}
