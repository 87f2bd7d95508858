import { View } from 'react-native';
import { Table } from '@/client/components/table';
import { TableButton } from '@/client/drawings/figure';
import { rpmText } from '@/client/drawings/speed-words';
import { inWindow } from '@/client/screens/replay/replay-data';
import type { Replay } from '@/client/screens/replay/use-replay';
import { space } from '@/client/theme/tokens';
import type { Analysis } from '@/signal/model';

const mostRows = 300;

/** Edges, speeds and gaps of the window, for those who read rather than look. */
export function WindowTable({ replay, analysis }: { replay: Replay; analysis: Analysis }) {
  return (
    <TableButton title="This stretch as a table">
      {() => (
        <View style={{ gap: space.l }}>
          <Table
            label="Edges"
            dense
            titled
            rows={inWindow(replay.edges, replay.window).slice(0, mostRows)}
            keyOf={(e, i) => `${e.channel}${i}`}
            columns={[
              { title: 'at', numeric: true, cell: (e) => `${e.t.toFixed(6)} s` },
              { title: 'channel', cell: (e) => e.channel },
              { title: 'edge', cell: (e) => (e.rising ? 'rising' : 'falling') },
              { title: 'direction', cell: (e) => e.direction },
            ]}
          />
          <Table
            label="Speed"
            dense
            titled
            rows={inWindow(analysis.speed, replay.window).slice(0, mostRows)}
            keyOf={(p, i) => `${p.t}${i}`}
            columns={[
              { title: 'at', numeric: true, cell: (p) => `${p.t.toFixed(6)} s` },
              { title: 'rpm', numeric: true, cell: (p) => (p.rpm === null ? 'unknown' : rpmText(p.rpm)) },
            ]}
          />
          <Table
            label="Gaps of the capture"
            dense
            titled
            rows={analysis.gaps}
            keyOf={(g) => String(g.from)}
            columns={[
              { title: 'from', numeric: true, cell: (g) => `${g.from.toFixed(4)} s` },
              { title: 'to', numeric: true, cell: (g) => `${g.to.toFixed(4)} s` },
              {
                title: 'samples lost',
                numeric: true,
                cell: (g) => `${g.estimated ? 'about ' : ''}${g.lostSamples}`,
              },
            ]}
          />
        </View>
      )}
    </TableButton>
  );
}
