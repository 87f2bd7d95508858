import { View } from 'react-native';
import { Table } from '@/client/components/table';
import type { RibbonData } from '@/client/drawings/ribbon-types';
import { durationText } from '@/client/drawings/time-axis';
import { space } from '@/client/theme/tokens';

/** Levels of each lane, then the edges of the window. */
export function SignalTable({ data }: { data: RibbonData }) {
  const volts = (v: number | null | undefined) => (v == null ? 'unknown' : `${v.toFixed(3)} V`);
  return (
    <View style={{ gap: space.l }}>
      <Table
        label="Levels of each channel"
        dense
        titled
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
        titled
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
