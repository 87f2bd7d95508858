import { AppShell } from '@/client/components/app-shell';
import { demoAnalysis, demoCapture, demoSamples } from '@/client/screens/gallery/demo-things';
import { lazyPage } from '@/client/screens/shell/lazy-page';

const MadeUpReplay = lazyPage(async () => (await import('@/client/screens/replay/pages')).MadeUpReplay);

const analysis = demoAnalysis();
const longTitle = 'Winch slips on reversal when the long rope is on the drum and the brake is released late';

/** Replay of a made-up run. */
export function ReplayGallery({ long }: { long: boolean }) {
  const capture = demoCapture(long ? { title: longTitle, tags: [], note: '' } : {});
  return (
    <AppShell>
      <MadeUpReplay capture={capture} analysis={analysis} samplesOf={demoSamples} />
    </AppShell>
  );
}
