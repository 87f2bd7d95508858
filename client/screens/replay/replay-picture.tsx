import { useMemo } from 'react';
import { View } from 'react-native';
import { Plate } from '@/client/components/plate';
import { Segmented } from '@/client/components/segmented';
import { Text } from '@/client/components/text';
import { Overview, overviewSentence } from '@/client/drawings/overview';
import { Ribbon } from '@/client/drawings/ribbon';
import { gutterPx, ribbonSentence, rightPx, speedLanePx } from '@/client/drawings/ribbon-layout';
import type { RibbonData, RibbonLane } from '@/client/drawings/ribbon-types';
import { speedAt, speedExtremes } from '@/client/drawings/speed-line';
import { rpmText } from '@/client/drawings/speed-words';
import { durationText, secondsText, timeScale } from '@/client/drawings/time-axis';
import { inWindow } from '@/client/screens/replay/replay-data';
import { spanOf } from '@/client/screens/replay/replay-window';
import { ScrubSurface } from '@/client/screens/replay/scrub-surface';
import { SpeedLane } from '@/client/screens/replay/speed-lane';
import type { Replay } from '@/client/screens/replay/use-replay';
import { space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';
import type { Analysis } from '@/signal/model';

type PictureProps = {
  replay: Replay;
  analysis: Analysis | null;
  lanes: readonly RibbonLane[];
  note: string | null;
  /** What a position of the wheel is called: "teeth". */
  positions: string;
};

/** What the ribbon draws now. */
export function pictureOf(
  replay: Replay,
  analysis: Analysis | null,
  lanes: readonly RibbonLane[],
): RibbonData {
  return {
    ...replay.window,
    lanes,
    edges: inWindow(replay.edges, replay.window),
    rejected: [],
    gaps: analysis?.gaps ?? [],
  };
}

export function RibbonPicture({ replay, analysis, lanes, note, positions }: PictureProps) {
  const wide = useWide();
  const { window, cursorS } = replay;
  const count = lanes.length;
  const crowded = count > (wide ? 4 : 2);
  const focus = crowded ? (replay.focus ?? lanes[0]?.channel ?? null) : replay.focus;
  const height = (crowded ? 180 + 44 * (count - 1) : Math.max(2, count) * 116) + 68 + speedLanePx;
  const speed = analysis?.speed;
  const extremes = useMemo(() => speedExtremes(speed ?? []), [speed]);
  const rpm = speedAt(speed ?? [], cursorS);
  const cursorText = `${secondsText(cursorS, spanOf(window) / 200, Math.max(1, replay.durationS))}${rpm === null ? '' : ` · ${rpmText(rpm)} rpm`}`;
  const secondsAt = (x: number, widthPx: number) =>
    timeScale(window.fromS, window.toS, gutterPx, widthPx - rightPx).s(x);
  const data = pictureOf(replay, analysis, lanes);
  const perPx = (widthPx: number) => spanOf(window) / (widthPx - gutterPx - rightPx);
  return (
    <Plate
      role="region"
      label="Signal"
      style={[{ padding: space.m, gap: space.s }, wide ? { flex: 1, minHeight: 420 } : null]}
    >
      <ScrubSurface
        label="Cursor in the signal"
        valueText={cursorText}
        description={ribbonSentence(data, durationText(spanOf(window)))}
        replay={replay}
        grow={wide}
        onPoint={(x, widthPx) =>
          replay.seek(Math.min(window.toS, Math.max(window.fromS, secondsAt(x, widthPx))))
        }
        onPinch={(move, widthPx) => {
          replay.zoom(move.factor, secondsAt(move.aboutX, widthPx));
          replay.pan(-move.panPx * perPx(widthPx));
        }}
        onWheel={(factor, panPx, x, widthPx) => {
          if (factor !== 1) replay.zoom(factor, secondsAt(x, widthPx));
          if (panPx !== 0) replay.pan(panPx * perPx(widthPx));
        }}
      >
        <Ribbon
          data={data}
          positions={positions}
          height={wide ? 'fill' : height}
          focus={focus}
          markS={cursorS}
          centreWord={cursorText}
          extraPx={speedLanePx}
          extra={(time, top) => (
            <SpeedLane
              speed={speed ?? []}
              extremes={extremes}
              gaps={analysis?.gaps ?? []}
              time={time}
              top={top}
              height={speedLanePx}
            />
          )}
        />
      </ScrubSurface>
      {crowded ? (
        <Segmented
          label="Lane in focus"
          bare
          value={focus ?? ''}
          onChange={replay.setFocus}
          options={lanes.map((l) => ({ value: l.channel, label: l.channel }))}
        />
      ) : null}
      {note ? (
        <Text size="small" tone="scribeSoft" role="status">
          {note}
        </Text>
      ) : null}
    </Plate>
  );
}

export function OverviewPicture({ replay, analysis }: Pick<PictureProps, 'replay' | 'analysis'>) {
  const { window, cursorS, durationS } = replay;
  const valueText = `${secondsText(cursorS, 0.01, Math.max(1, durationS))} of ${secondsText(durationS, 0.01, Math.max(1, durationS))}`;
  const { speed = [], gaps = [], findings = [] } = analysis ?? {};
  const drawn = { durationS, speed, gaps, findings };
  return (
    <View style={{ marginVertical: -2 }}>
      <ScrubSurface
        label="Place in the capture"
        valueText={valueText}
        description={overviewSentence(drawn)}
        replay={replay}
        onPoint={(x, widthPx) => replay.centre((x / widthPx) * durationS)}
      >
        <Overview {...drawn} window={window} cursorS={cursorS} />
      </ScrubSurface>
    </View>
  );
}
