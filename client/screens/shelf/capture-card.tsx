import { Link } from 'expo-router';
import type { Href } from 'expo-router';
import { View } from 'react-native';
import type { Capture } from '@/server/contract';
import { Plate } from '@/client/components/plate';
import { StatusWord } from '@/client/components/status-word';
import { TagChips } from '@/client/components/tag-chips';
import { Text } from '@/client/components/text';
import { useNow } from '@/client/data/use-now';
import { captureHealth, lengthWords, titleOf } from '@/client/screens/shelf/capture-words';
import { capturePath } from '@/client/screens/shared/use-go';
import { shortInstant } from '@/client/screens/shared/when';
import { space } from '@/client/theme/tokens';

/** One capture of the Shelf on a phone; the whole card opens the replay. */
export function CaptureCard({ capture }: { capture: Capture }) {
  const health = captureHealth(capture.findings);
  const nowMs = useNow(60_000);
  return (
    <View role="listitem">
      <Link
        href={capturePath(capture.id) as Href}
        style={{ display: 'flex', textDecorationLine: 'none' } as object}
      >
        <Plate style={{ flex: 1, minWidth: 0, gap: space.s }}>
          <Text heading={2} weight="medium" lines={2}>
            {titleOf(capture)}
          </Text>
          <Text size="small" tone="scribeSoft" lines={2}>
            {capture.rig.name}
          </Text>
          <StatusWord status={health.status} word={health.word} />
          {capture.tags.length > 0 ? <TagChips tags={capture.tags} /> : null}
          <View style={{ flexDirection: 'row', justifyContent: 'space-between', gap: space.m }}>
            <Text size="small" tone="scribeSoft" figures>
              {shortInstant(capture.startedAt, nowMs)}
            </Text>
            <Text size="small" tone="scribeSoft" figures>
              {lengthWords(capture.durationS)}
            </Text>
          </View>
        </Plate>
      </Link>
    </View>
  );
}
