import { createElement } from 'react';
import { View } from 'react-native';
import { Text } from '@/client/components/text';
import { unbroken } from '@/client/components/unbroken';
import { space } from '@/client/theme/tokens';
import type { ColourName } from '@/client/theme/tokens';

export type Fact = { name: string; value: string; tone?: ColourName };

/** Letters of a value that stays in one line; a long name wraps beside it. */
const shortValue = 20;

/** Names left, values right. */
export function Facts({ facts }: { facts: readonly Fact[] }) {
  return createElement(
    'dl',
    { style: { margin: 0, display: 'flex', flexDirection: 'column', gap: 2 } },
    facts.map((fact) => {
      const short = fact.value.length <= shortValue;
      return (
        <View key={fact.name} style={{ flexDirection: 'row', justifyContent: 'space-between', gap: space.m }}>
          {createElement(
            'dt',
            { style: short ? { flexShrink: 1, minWidth: 0 } : { flexShrink: 0, maxWidth: '50%' } },
            <Text size="small" tone="scribeSoft">
              {unbroken(fact.name)}
            </Text>,
          )}
          {createElement(
            'dd',
            { style: { margin: 0, textAlign: 'right', minWidth: 0, flexShrink: short ? 0 : 1 } },
            <Text size="small" figures weight={fact.tone ? 'bold' : 'medium'} tone={fact.tone ?? 'scribe'}>
              {unbroken(fact.value)}
            </Text>,
          )}
        </View>
      );
    }),
  );
}
