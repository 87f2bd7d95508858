import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { TableButton } from '@/client/drawings/figure';
import type { RibbonData } from '@/client/drawings/ribbon-types';
import { SignalTable } from '@/client/screens/watch/signal-table';
import { space } from '@/client/theme/tokens';

export type RibbonControlsProps = {
  held: boolean;
  onHold: () => void;
  spanLabel: string;
  unit: 'teeth' | 'time';
  /** What a position of the wheel is called: "teeth". */
  positions: string;
  onUnit: () => void;
  onShorter: (() => void) | null;
  onLonger: (() => void) | null;
  anchor: 'edge' | 'now';
  onAnchor: () => void;
  data: RibbonData | null;
};

/** Stops the picture, and makes it shorter or longer. */
export function RibbonControls({ held, onHold, spanLabel, onShorter, onLonger }: RibbonControlsProps) {
  return (
    <View style={row}>
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
    </View>
  );
}

/** Teeth or time; on the tooth or free-running; the table. */
export function RibbonChoices({
  spanLabel,
  unit,
  positions,
  onUnit,
  anchor,
  onAnchor,
  data,
}: RibbonControlsProps) {
  const shown = anchor === 'edge' ? 'on the tooth' : 'free-running';
  return (
    <View style={row}>
      <Button
        label={spanLabel}
        longLabel={`${spanLabel}: change to ${unit === 'teeth' ? 'time' : positions}`}
        onPress={onUnit}
        style={tight}
      />
      <Button label={shown} longLabel={`${shown}: change`} onPress={onAnchor} style={tight} />
      {data ? <TableButton title="Signal as a table">{() => <SignalTable data={data} />}</TableButton> : null}
    </View>
  );
}

const row = { flexDirection: 'row', flexWrap: 'wrap', gap: space.s, alignItems: 'center' } as const;
const tight = { paddingHorizontal: space.m };
