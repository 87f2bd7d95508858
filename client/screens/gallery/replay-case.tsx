import { useWindowDimensions } from 'react-native';
import { AppShell } from '@/client/components/app-shell';
import { demoAnalysis, demoCapture, demoSamples } from '@/client/screens/gallery/demo-things';
import { laneOf } from '@/client/screens/replay/replay-data';
import { ReplayView } from '@/client/screens/replay/replay-view';
import { fetchFor } from '@/client/screens/replay/replay-window';
import { useReplay } from '@/client/screens/replay/use-replay';
import { useWide } from '@/client/theme/use-theme';

const analysis = demoAnalysis();
const longTitle = 'Winch slips on reversal when the long rope is on the drum and the brake is released late';

/** Replay of a made-up run. */
export function ReplayGallery({ long }: { long: boolean }) {
  const wide = useWide();
  const { width } = useWindowDimensions();
  const capture = demoCapture(long ? { title: longTitle, tags: [], note: '' } : {});
  const replay = useReplay(capture, analysis);
  const { fromS, toS, points } = fetchFor(replay.window, wide ? width - 560 : width - 120, capture.durationS);
  const lanes = capture.channels.map((name) =>
    laneOf(
      name,
      demoSamples(name, fromS, toS, points),
      analysis.channels[name],
      { clipLowV: 0, clipHighV: 3.3 },
      replay.window,
    ),
  );
  return (
    <AppShell>
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
    </AppShell>
  );
}
