import { createElement } from 'react';
import { View } from 'react-native';
import { Text } from '@/client/components/text';
import { space } from '@/client/theme/tokens';
import type { ColourName } from '@/client/theme/tokens';

export type Fact = { name: string; value: string; tone?: ColourName };

/** Letters of a value that leaves most of the width to a long name. */
const shortValue = 12;

/** Names left, values right. */
export function Facts({ facts }: { facts: readonly Fact[] }) {
  return createElement(
    'dl',
    { style: { margin: 0, display: 'flex', flexDirection: 'column', gap: 2 } },
    facts.map((fact) => (
      <View key={fact.name} style={{ flexDirection: 'row', justifyContent: 'space-between', gap: space.m }}>
        {createElement(
          'dt',
          { style: { flexShrink: 0, maxWidth: fact.value.length > shortValue ? '50%' : '75%', minWidth: 0 } },
          <Text size="small" tone="scribeSoft">
            {fact.name}
          </Text>,
        )}
        {createElement(
          'dd',
          { style: { margin: 0, textAlign: 'right', minWidth: 0, flexShrink: 1 } },
          <Text size="small" figures weight={fact.tone ? 'bold' : 'medium'} tone={fact.tone ?? 'scribe'}>
            {fact.value}
          </Text>,
        )}
      </View>
    )),
  );
}
