import { useState } from 'react';
import { Pressable } from 'react-native';
import { Text } from '@/client/components/text';
import { useNow } from '@/client/data/use-now';
import { exactInstant, shortInstant } from '@/client/screens/shared/when';
import { size } from '@/client/theme/tokens';

/** A time in the reader's zone; a press shows the exact instant. */
export function Instant({ at }: { at: string }) {
  const [exact, setExact] = useState(false);
  const nowMs = useNow(60_000);
  const shown = exact ? exactInstant(at) : shortInstant(at, nowMs);
  return (
    <Pressable
      role="button"
      aria-label={`${shown}. ${exact ? 'Show the short time' : 'Show the exact time'}`}
      onPress={() => setExact(!exact)}
      style={{
        minHeight: size.target,
        minWidth: size.target,
        justifyContent: 'center',
        alignSelf: 'flex-start',
      }}
    >
      <Text size="small" tone="scribeSoft" figures>
        {shown}
      </Text>
    </Pressable>
  );
}
