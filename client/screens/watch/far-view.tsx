import { useEffect } from 'react';
import { Modal, Pressable, View, useWindowDimensions } from 'react-native';
import { DirectionGlyph } from '@/client/components/direction-glyph';
import { IconButton } from '@/client/components/icon-button';
import { SeverityShape } from '@/client/components/shapes';
import { Text, plainFigures } from '@/client/components/text';
import { BigSpeed } from '@/client/drawings/big-speed';
import { toneOf } from '@/client/screens/watch/speed-plate';
import type { WatchNow } from '@/client/screens/watch/watch-model';
import { space } from '@/client/theme/tokens';
import type { ColourName } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

type FarViewProps = { open: boolean; rigName: string; now: WatchNow; onClose: () => void };

/** The whole panel is speed, arrow and word of direction, one word of health. Read from two metres; stays awake. */
export function FarView({ open, rigName, now, onClose }: FarViewProps) {
  const colours = useColours();
  const { width, height } = useWindowDimensions();
  useStayAwake(open);
  const { saying, health } = now;
  const most = Math.min(width * 0.3, height * 0.5);
  const line = Math.max(28, Math.min(width * 0.06, height * 0.1));
  return (
    <Modal
      visible={open}
      animationType="none"
      onRequestClose={onClose}
      {...({ 'aria-label': `Far view of ${rigName}` } as object)}
    >
      <View style={{ flex: 1, backgroundColor: colours.ground }}>
        <View style={{ flexDirection: 'row', alignItems: 'center', padding: space.s, paddingLeft: space.l }}>
          <Text tone="scribeSoft" lines={2} style={{ flex: 1 }}>
            {rigName}
          </Text>
          <IconButton icon="close" label="Close far view" onPress={onClose} />
        </View>
        <Pressable
          aria-hidden
          tabIndex={-1}
          onPress={onClose}
          style={{ flex: 1, justifyContent: 'center', padding: space.xl, gap: space.l }}
        >
          <Row>
            {saying.direction ? <DirectionGlyph direction={saying.direction} size={line * 1.5} /> : null}
            <Text
              weight="medium"
              tone={toneOf(now)}
              style={{ fontSize: line, lineHeight: line * 1.2, flexShrink: 1 }}
            >
              {saying.directionWord ?? ''}
            </Text>
          </Row>
          <BigSpeed saying={saying} most={most} />
          {saying.small ? (
            <Text
              tone={saying.loud ? 'fault' : 'scribeSoft'}
              style={[plainFigures, { fontSize: line * 0.55, lineHeight: line * 0.75 }]}
            >
              {saying.small.startsWith('±') ? `${saying.small} rpm` : saying.small}
            </Text>
          ) : null}
          <Row>
            {health.status === 'good' || health.status === 'unknown' ? null : (
              <SeverityShape severity={health.status} size={line} />
            )}
            <Text
              weight="medium"
              tone={healthTone[health.status]}
              style={{ fontSize: line, lineHeight: line * 1.2 }}
            >
              {healthWord[health.status]}
            </Text>
          </Row>
        </Pressable>
      </View>
    </Modal>
  );
}

function Row({ children }: { children: React.ReactNode }) {
  return <View style={{ flexDirection: 'row', alignItems: 'center', gap: space.l }}>{children}</View>;
}

const healthWord = {
  good: 'healthy',
  note: 'note',
  warn: 'check',
  fault: 'grave',
  unknown: 'unknown',
} as const;
const healthTone: Record<keyof typeof healthWord, ColourName> = {
  good: 'good',
  note: 'scribeSoft',
  warn: 'warn',
  fault: 'fault',
  unknown: 'still',
};

/** Keeps the screen on while it is asked to; browsers without that ability, or that refuse, just do not. */
function useStayAwake(wanted: boolean): void {
  useEffect(() => {
    if (!wanted || !('wakeLock' in navigator)) return undefined;
    let lock: WakeLockSentinel | null = null;
    let over = false;
    const ask = () => {
      if (document.visibilityState !== 'visible') return;
      navigator.wakeLock.request('screen').then(
        (given) => {
          if (over) void given.release();
          else lock = given;
        },
        () => undefined,
      );
    };
    ask();
    document.addEventListener('visibilitychange', ask);
    return () => {
      over = true;
      document.removeEventListener('visibilitychange', ask);
      void lock?.release();
    };
  }, [wanted]);
}
