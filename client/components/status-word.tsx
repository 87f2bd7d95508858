import { View } from 'react-native';
import { FaultShape, GoodShape, NoteShape, UnknownShape, WarnShape } from '@/client/components/shapes';
import { Text } from '@/client/components/text';
import { space } from '@/client/theme/tokens';
import type { ColourName, TypeSize } from '@/client/theme/tokens';

export type Status = 'good' | 'note' | 'warn' | 'fault' | 'unknown';

/** A shape and a word; the colour only repeats what both say. */
export function StatusWord({
  status,
  word,
  size = 'small',
}: {
  status: Status;
  word: string;
  size?: TypeSize;
}) {
  const Shape = shapes[status];
  return (
    <View style={{ flexDirection: 'row', alignItems: 'center', gap: space.s, flexShrink: 1 }}>
      <View style={{ flexShrink: 0 }}>
        <Shape size={size === 'tiny' || size === 'small' ? 14 : 18} />
      </View>
      <Text size={size} tone={tones[status]} figures style={{ flexShrink: 1 }}>
        {word}
      </Text>
    </View>
  );
}

const shapes = {
  good: GoodShape,
  note: NoteShape,
  warn: WarnShape,
  fault: FaultShape,
  unknown: UnknownShape,
};
const tones: Record<Status, ColourName> = {
  good: 'good',
  note: 'scribeSoft',
  warn: 'warn',
  fault: 'fault',
  unknown: 'still',
};
