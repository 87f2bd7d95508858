import { Pressable, View } from 'react-native';
import { DirectionGlyph } from '@/client/components/direction-glyph';
import { Hidden } from '@/client/components/hidden';
import { Icon } from '@/client/components/icon';
import { Plate } from '@/client/components/plate';
import { StatusWord } from '@/client/components/status-word';
import { Table } from '@/client/components/table';
import { Text } from '@/client/components/text';
import { BigSpeed } from '@/client/drawings/big-speed';
import { TableButton } from '@/client/drawings/figure';
import type { SpeedPoint } from '@/client/drawings/speed-line';
import { SpeedSpark } from '@/client/drawings/speed-spark';
import { rpmText } from '@/client/drawings/speed-words';
import type { WatchNow } from '@/client/screens/watch/watch-model';
import { space } from '@/client/theme/tokens';
import type { ColourName } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';

type SpeedPlateProps = {
  now: WatchNow;
  /** After the error: "over the last turn · 24 teeth a turn". */
  method: string;
  points: readonly SpeedPoint[];
  onFar: () => void;
};

/** How fast, which way, is it healthy: readable at arm's length. A press on it opens the far view. */
export function SpeedPlate({ now, method, points, onFar }: SpeedPlateProps) {
  const wide = useWide();
  const { saying, health } = now;
  const words = wordsUnder(now, method);
  return (
    <Plate role="region" label="Speed" style={{ gap: space.xs }}>
      <View style={{ flexDirection: 'row', alignItems: 'center', gap: space.s, minHeight: 32 }}>
        {saying.direction ? <DirectionGlyph direction={saying.direction} size={wide ? 28 : 32} /> : null}
        <Text
          size={(saying.directionWord?.length ?? 0) > 9 ? (wide ? 'small' : 'body') : wide ? 'body' : 'lead'}
          weight="medium"
          tone={toneOf(now)}
          style={{ flex: 1 }}
        >
          {saying.directionWord ?? ''}
        </Text>
        <StatusWord {...health} />
      </View>
      <Pressable role="button" onPress={onFar}>
        <BigSpeed saying={saying} most={wide ? 60 : 72} />
        <Hidden>Far view</Hidden>
        <View style={{ position: 'absolute', right: 0, top: 0 }}>
          <Icon name="expand" size={20} tone="scribeSoft" />
        </View>
      </Pressable>
      <View style={{ flexDirection: 'row', alignItems: 'center', marginRight: -space.m, minHeight: 44 }}>
        <Text
          size={wide ? 'tiny' : 'small'}
          tone={saying.loud ? 'fault' : 'scribeSoft'}
          figures
          style={{ flex: 1 }}
        >
          {words}
        </Text>
        <TableButton title="Speed of the last 60 s as a table">
          {() => <SpeedTable points={points} />}
        </TableButton>
      </View>
      <SpeedSpark points={points} height={wide ? 40 : 48} />
      <Hidden
        polite
      >{`${saying.big.kind === 'word' ? saying.big.text : (saying.directionWord ?? '')}, ${health.word}`}</Hidden>
    </Plate>
  );
}

function SpeedTable({ points }: { points: readonly SpeedPoint[] }) {
  const rows = points.filter((_, i) => i % 4 === 0);
  return (
    <Table
      label="Speed of the last 60 s"
      dense
      rows={rows}
      keyOf={(p) => String(p.t)}
      columns={[
        { title: 'seconds ago', numeric: true, cell: (p) => (-p.t).toFixed(0) },
        { title: 'rpm', numeric: true, cell: (p) => (p.rpm === null ? 'unknown' : rpmText(p.rpm)) },
      ]}
    />
  );
}

/** Error and method under a number; what else there is to say stands alone. */
function wordsUnder({ saying }: WatchNow, method: string): string {
  if (saying.big.kind === 'word') return saying.small;
  if (saying.small === '') return method;
  return saying.small.startsWith('±') ? `${saying.small} ${method}` : saying.small;
}

export function toneOf({ saying }: WatchNow): ColourName {
  return saying.direction === 'forward' || saying.direction === 'reverse' ? saying.direction : 'still';
}
