import type { ReactNode } from 'react';
import { View } from 'react-native';
import { space } from '@/client/theme/tokens';

/** Fields beside each other where there is room, under each other where not. */
export function Pair({ children }: { children: ReactNode[] }) {
  return (
    <View style={{ flexDirection: 'row', flexWrap: 'wrap', gap: space.l, alignItems: 'flex-end' }}>
      {children.map((child, i) => (
        <View key={i} style={{ flexGrow: 1, flexBasis: 150, minWidth: 0 }}>
          {child}
        </View>
      ))}
    </View>
  );
}
