import { Link } from 'expo-router';
import type { Href } from 'expo-router';
import { View } from 'react-native';
import type { Rig } from '@/server/contract';
import { Plate } from '@/client/components/plate';
import { StatusWord } from '@/client/components/status-word';
import { Text } from '@/client/components/text';
import { MiniRibbon, miniWish } from '@/client/screens/rigs/mini-ribbon';
import { SpeedWord, stateWords } from '@/client/screens/rigs/speed-word';
import { useRigNow } from '@/client/screens/rigs/use-rig-now';
import { rigPath } from '@/client/screens/shared/use-go';
import { space } from '@/client/theme/tokens';

/** One rig of the list on a phone, live; the whole card opens Watch. */
export function RigCard({ rig }: { rig: Rig }) {
  const now = useRigNow(rig, miniWish);
  const { saying, health, isLive, lastBlock } = now;
  return (
    <View role="listitem">
      <Link
        href={rigPath.watch(rig.id) as Href}
        style={{ display: 'flex', textDecorationLine: 'none' } as object}
      >
        <Plate style={{ flex: 1, minWidth: 0, gap: space.s }}>
          <Text heading={2} weight="medium" lines={3}>
            {rig.name}
          </Text>
          <View style={{ flexDirection: 'row', gap: space.m, alignItems: 'center' }}>
            <View style={{ flex: 1, minWidth: 0 }}>
              <SpeedWord saying={saying} size="title" />
            </View>
            <StatusWord status={health.status} word={health.word} />
          </View>
          <MiniRibbon
            rig={rig}
            view={now.view}
            height={28 + 24 * Math.min(rig.channels.length, 4)}
            live={isLive}
          />
          <View style={{ flexDirection: 'row', justifyContent: 'space-between', gap: space.m }}>
            <Text size="small" tone="scribeSoft" style={{ flexShrink: 1 }}>
              {stateWords(saying)}
            </Text>
            <Text size="small" tone="scribeSoft" figures style={{ flexShrink: 0 }}>
              {lastBlock}
            </Text>
          </View>
        </Plate>
      </Link>
    </View>
  );
}
