import { useLocalSearchParams } from 'expo-router';
import { PartsGallery } from '@/client/screens/gallery/parts';
import { ReplayGallery } from '@/client/screens/gallery/replay-case';
import { WatchGallery } from '@/client/screens/gallery/watch-cases';

/** `/gallery`, `/gallery?watch=gap`, `/gallery?watch=usual&moving=1`, `/gallery?replay=1`: made-up content, for those who draw. */
export function Gallery() {
  const { watch, replay, moving } = useLocalSearchParams<{
    watch?: string;
    replay?: string;
    moving?: string;
  }>();
  if (watch) return <WatchGallery key={watch} name={watch} moving={moving === '1'} />;
  if (replay) return <ReplayGallery long={replay === 'long'} />;
  return <PartsGallery />;
}
