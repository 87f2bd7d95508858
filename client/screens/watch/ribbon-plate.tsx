import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { Plate } from '@/client/components/plate';
import { Segmented } from '@/client/components/segmented';
import { Table } from '@/client/components/table';
import { Text } from '@/client/components/text';
import { TableButton } from '@/client/drawings/figure';
import { Ribbon } from '@/client/drawings/ribbon';
import type { RibbonData } from '@/client/drawings/ribbon-types';
import { durationText } from '@/client/drawings/time-axis';
import { space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';

type RibbonPlateProps = {
  data: RibbonData | null;
  anchor: 'edge' | 'now';
  /** "held at 13:52:07", or null while live. */
  heldText: string | null;
  focus: string | null;
  onFocus: (channel: string) => void;
  markS: number | null;
  /** Why there is no picture. */
  emptyText: string;
};

/** The live signal. On a phone with more than two channels one lane is in focus and the others are thin. */
export function RibbonPlate({ data, anchor, heldText, focus, onFocus, markS, emptyText }: RibbonPlateProps) {
  const wide = useWide();
  const count = data?.lanes.length ?? 1;
  const crowded = count > (wide ? 4 : 2);
  const focused = crowded ? (focus ?? data?.lanes[0]?.channel ?? null) : focus;
  const height = crowded ? 200 + 44 * (count - 1) + 68 : Math.max(2, count) * 128 + 68;
  const how = heldText ?? (anchor === 'edge' ? 'still on the tooth' : 'free-running');
  return (
    <Plate
      role="region"
      label="Signal"
      style={[{ padding: space.m, gap: space.s }, wide ? { flex: 1, minHeight: 320 } : null]}
    >
      {data ? (
        <Ribbon
          data={data}
          height={wide ? 'fill' : height}
          anchorS={data.toS}
          rightWord={anchor === 'edge' ? 'last edge' : 'now'}
          centreWord={how}
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

type RibbonControlsProps = {
  held: boolean;
  onHold: () => void;
  spanLabel: string;
  unit: 'teeth' | 'time';
  onUnit: () => void;
  onShorter: (() => void) | null;
  onLonger: (() => void) | null;
  anchor: 'edge' | 'now';
  onAnchor: () => void;
  data: RibbonData | null;
};

/** Hold, shorter, longer; teeth or time; on the tooth or free-running; the table. */
export function RibbonControls(props: RibbonControlsProps) {
  const { held, onHold, spanLabel, unit, onUnit, onShorter, onLonger, anchor, onAnchor, data } = props;
  return (
    <View style={{ flexDirection: 'row', flexWrap: 'wrap', gap: space.s, alignItems: 'center' }}>
      <Button
        label={held ? 'Release' : 'Hold'}
        longLabel={held ? 'Release the picture' : 'Hold the picture'}
        pressed={held}
        onPress={onHold}
        style={tight}
      />
      <Button
        label="shorter"
        longLabel={`shorter than ${spanLabel}`}
        disabled={!onShorter}
        onPress={() => onShorter?.()}
        style={tight}
      />
      <Button
        label="longer"
        longLabel={`longer than ${spanLabel}`}
        disabled={!onLonger}
        onPress={() => onLonger?.()}
        style={tight}
      />
      <Button
        label={spanLabel}
        longLabel={`${spanLabel}: change to ${unit === 'teeth' ? 'time' : 'teeth'}`}
        onPress={onUnit}
        style={tight}
      />
      <Button
        label={anchor === 'edge' ? 'on the tooth' : 'free-running'}
        longLabel={`${anchor === 'edge' ? 'on the tooth' : 'free-running'}: change`}
        onPress={onAnchor}
        style={tight}
      />
      {data ? <TableButton title="Signal as a table">{() => <SignalTable data={data} />}</TableButton> : null}
    </View>
  );
}

const tight = { paddingHorizontal: space.m };

/** Levels of each lane, then the edges of the window. */
export function SignalTable({ data }: { data: RibbonData }) {
  const volts = (v: number | null | undefined) => (v == null ? 'unknown' : `${v.toFixed(3)} V`);
  return (
    <View style={{ gap: space.l }}>
      <Table
        label="Levels of each channel"
        dense
        rows={data.lanes}
        keyOf={(l) => l.channel}
        columns={[
          { title: 'channel', cell: (l) => l.channel },
          { title: 'low', numeric: true, cell: (l) => volts(l.lowV) },
          { title: 'release', numeric: true, cell: (l) => volts(l.bands.at(-1)?.releaseV) },
          { title: 'operate', numeric: true, cell: (l) => volts(l.bands.at(-1)?.operateV) },
          { title: 'high', numeric: true, cell: (l) => volts(l.highV) },
        ]}
      />
      <Table
        label="Edges in the window"
        dense
        rows={data.edges.slice(-200)}
        keyOf={(e, i) => `${e.channel}${e.t}${i}`}
        columns={[
          { title: 'before the right edge', numeric: true, cell: (e) => durationText(data.toS - e.t) },
          { title: 'channel', cell: (e) => e.channel },
          { title: 'edge', cell: (e) => (e.rising ? 'rising' : 'falling') },
          { title: 'direction', cell: (e) => e.direction },
        ]}
      />
    </View>
  );
}
