import type { ReactNode } from 'react';
import { View } from 'react-native';
import { space } from '@/client/theme/tokens';

/** Fields beside each other where each has `least` px, under each other where not. */
export function Pair({ children, least = 150 }: { children: ReactNode[]; least?: number }) {
  return (
    <View style={{ flexDirection: 'row', flexWrap: 'wrap', gap: space.l, alignItems: 'flex-end' }}>
      {children.map((child, i) => (
        <View key={i} style={{ flexGrow: 1, flexBasis: least, minWidth: 0 }}>
          {child}
        </View>
      ))}
    </View>
  );
}
