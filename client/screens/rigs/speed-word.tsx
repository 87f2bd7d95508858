import { View } from 'react-native';
import { DirectionGlyph } from '@/client/components/direction-glyph';
import { Text } from '@/client/components/text';
import type { SpeedSaying } from '@/client/drawings/speed-words';
import { space, type TypeSize } from '@/client/theme/tokens';

/** Direction glyph, number with its unit, or the word that stands in its place. */
export function SpeedWord({ saying, size }: { saying: SpeedSaying; size: TypeSize }) {
  const number = saying.big.kind === 'number';
  return (
    <View style={{ flexDirection: 'row', alignItems: 'center', gap: space.s, flexShrink: 1, minWidth: 0 }}>
      {saying.direction ? (
        <DirectionGlyph direction={saying.direction} size={size === 'title' ? 30 : 24} />
      ) : null}
      <Text size={size} weight="medium" figures tone={number ? 'scribe' : 'still'}>
        {saying.big.text}
        {number ? (
          <Text size="small" tone="scribeSoft">
            {' '}
            rpm
          </Text>
        ) : null}
      </Text>
    </View>
  );
}

/** "running, forward", "below 0.6 rpm for 12 s": the state in words, beside what stands big. */
export function stateWords(saying: SpeedSaying): string {
  // How long ago the last block came stands beside it in a list.
  if (saying.big.kind === 'word')
    return saying.small.replace(/,? (last block|since) .*$/, '') || saying.big.text;
  return saying.directionWord ? `running, ${saying.directionWord}` : 'running';
}
