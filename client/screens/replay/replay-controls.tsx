import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { IconButton } from '@/client/components/icon-button';
import { BareSelect } from '@/client/components/select';
import { playRates, spanOf } from '@/client/screens/replay/replay-window';
import type { Replay } from '@/client/screens/replay/use-replay';
import { size, space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';

/**
 * Every move without dragging: edge to edge, play, how fast, raw or filtered, closer, wider, earlier, later. One row where
 * there is room.
 */
export function ReplayControls({ replay }: { replay: Replay }) {
  const wide = useWide();
  const span = spanOf(replay.window);
  const other = replay.signal === 'raw' ? 'filtered' : 'raw';
  return (
    <View style={wide ? { flexDirection: 'row', gap: space.l } : { gap: space.s }}>
      <View style={[row, wide ? { gap: space.l } : null]}>
        <View style={{ flexDirection: 'row', gap: tightPx }}>
          <IconButton
            kind="outlined"
            icon="edgeBack"
            label="To the edge before"
            disabled={!replay.hasEdge(-1)}
            onPress={() => replay.jump(-1)}
            style={narrow}
          />
          <IconButton
            kind="filled"
            icon={replay.playing ? 'pause' : 'play'}
            label={replay.playing ? 'Pause' : 'Play'}
            onPress={replay.togglePlay}
            style={{ width: 50 }}
          />
          <IconButton
            kind="outlined"
            icon="edgeOn"
            label="To the next edge"
            disabled={!replay.hasEdge(1)}
            onPress={() => replay.jump(1)}
            style={narrow}
          />
        </View>
        <View style={{ flexDirection: 'row', gap: tightPx, marginLeft: wide ? 0 : 'auto' }}>
          <View style={{ width: 104 }}>
            <BareSelect
              label="Replay speed"
              value={String(replay.playRate)}
              options={playRates.map((r) => ({ value: String(r), label: `${r} ×` }))}
              onChange={(v) => replay.setRate(Number(v))}
            />
          </View>
          <Button
            label={replay.signal}
            longLabel={`${replay.signal} signal: change to ${other}`}
            onPress={() => replay.setSignal(other)}
            style={{ minWidth: 82, paddingHorizontal: space.s }}
          />
        </View>
      </View>
      <View style={[row, wide ? { flex: 1 } : null]}>
        <IconButton
          kind="outlined"
          icon="back"
          label="Earlier"
          disabled={replay.window.fromS <= 0}
          onPress={() => replay.pan(-span / 2)}
        />
        <IconButton
          kind="outlined"
          icon="minus"
          label="Wider"
          disabled={!replay.canWider}
          onPress={() => replay.zoom(2)}
        />
        <IconButton
          kind="outlined"
          icon="plus"
          label="Closer"
          disabled={!replay.canCloser}
          onPress={() => replay.zoom(0.5)}
        />
        <IconButton
          kind="outlined"
          icon="next"
          label="Later"
          disabled={replay.window.toS >= replay.durationS}
          onPress={() => replay.pan(span / 2)}
        />
        <Button
          label="Whole"
          longLabel="Whole capture"
          disabled={!replay.canWider}
          onPress={() => replay.show({ fromS: 0, toS: replay.durationS })}
          style={{ marginLeft: 'auto', paddingHorizontal: space.m }}
        />
      </View>
    </View>
  );
}

// All of a row must stand side by side on a phone of 390 px.
const tightPx = 6;
const row = { flexDirection: 'row', flexWrap: 'wrap', gap: tightPx } as const;
const narrow = { minWidth: size.target };
