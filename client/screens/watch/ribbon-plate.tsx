import { View } from 'react-native';
import { Plate } from '@/client/components/plate';
import { Segmented } from '@/client/components/segmented';
import { Text } from '@/client/components/text';
import { Ribbon } from '@/client/drawings/ribbon';
import type { RibbonData } from '@/client/drawings/ribbon-types';
import { space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';

type RibbonPlateProps = {
  data: RibbonData | null;
  /** What a position of the wheel is called: "teeth". */
  positions: string;
  anchor: 'edge' | 'now';
  /** "held at 13:52:07", or null while live. */
  heldText: string | null;
  held: boolean;
  /** The lanes show what the band sees: the filter takes the level away. */
  filtered: boolean;
  isLive: boolean;
  focus: string | null;
  onFocus: (channel: string) => void;
  markS: number | null;
  /** Why there is no picture. */
  emptyText: string;
};

/** The live signal. On a phone with more than two channels one lane is in focus and the others are thin. */
export function RibbonPlate({
  data,
  positions,
  anchor,
  heldText,
  held,
  filtered,
  isLive,
  focus,
  onFocus,
  markS,
  emptyText,
}: RibbonPlateProps) {
  const wide = useWide();
  const count = data?.lanes.length ?? 1;
  const crowded = count > (wide ? 4 : 2);
  const focused = crowded ? (focus ?? data?.lanes[0]?.channel ?? null) : focus;
  const height = crowded ? 200 + 44 * (count - 1) + 68 : Math.max(2, count) * 128 + 68;
  const stance = heldText ?? (anchor === 'edge' ? 'still on the tooth' : 'free-running');
  const how = filtered ? `filtered · ${stance}` : stance;
  return (
    <Plate
      role="region"
      label="Signal"
      style={[{ padding: space.m, gap: space.s }, wide ? { flex: 1, minHeight: 320 } : null]}
    >
      {data ? (
        <Ribbon
          data={data}
          positions={positions}
          height={wide ? 'fill' : height}
          anchorS={data.toS}
          rightWord={anchor === 'edge' ? 'last edge' : 'now'}
          centreWord={how}
          centreTone={isLive || held ? 'dye' : 'fault'}
          focus={focused}
          markS={markS}
        />
      ) : (
        <View
          style={{
            minHeight: height,
            flex: wide ? 1 : undefined,
            alignItems: 'center',
            justifyContent: 'center',
            padding: space.xl,
          }}
        >
          <Text tone="scribeSoft" style={{ textAlign: 'center' }}>
            {emptyText}
          </Text>
        </View>
      )}
      {data && crowded ? (
        <Segmented
          label="Lane in focus"
          bare
          value={focused ?? ''}
          onChange={onFocus}
          options={data.lanes.map((l) => ({ value: l.channel, label: l.channel }))}
        />
      ) : null}
    </Plate>
  );
}
