import { useWindowDimensions } from 'react-native';
import { laneOf } from '@/client/screens/replay/replay-data';
import { ReplayView } from '@/client/screens/replay/replay-view';
import { fetchFor } from '@/client/screens/replay/replay-window';
import { useReplay } from '@/client/screens/replay/use-replay';
import { useWide } from '@/client/theme/use-theme';
import type { Capture, Samples } from '@/server/contract';
import type { Analysis } from '@/signal/model';

type MadeUpReplayProps = {
  capture: Capture;
  analysis: Analysis;
  samplesOf: (channel: string, fromS: number, toS: number, points: number) => Samples;
};

/** Replay of what no hub holds, for those who draw. */
export function MadeUpReplay({ capture, analysis, samplesOf }: MadeUpReplayProps) {
  const wide = useWide();
  const { width } = useWindowDimensions();
  const replay = useReplay(capture, analysis);
  const { fromS, toS, points } = fetchFor(replay.window, wide ? width - 560 : width - 120, capture.durationS);
  const lanes = capture.channels.map((name) =>
    laneOf(
      name,
      samplesOf(name, fromS, toS, points),
      analysis.channels[name],
      { clipLowV: 0, clipHighV: 3.3 },
      replay.window,
    ),
  );
  return (
    <ReplayView
      capture={capture}
      analysis={analysis}
      analysisState={null}
      lanes={lanes}
      replay={replay}
      note={null}
      onEdit={() => undefined}
      onDelete={() => undefined}
    />
  );
}
