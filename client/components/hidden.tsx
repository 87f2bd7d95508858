import { Text } from 'react-native';
import type { TextStyle } from 'react-native';

/** For screen readers only; `polite` reads changes out when nothing else is said. */
export function Hidden({ children, polite }: { children: string; polite?: boolean }) {
  return (
    <Text {...(polite ? { role: 'status' as never } : {})} style={unseen}>
      {children}
    </Text>
  );
}

const unseen = {
  position: 'absolute',
  width: 1,
  height: 1,
  overflow: 'hidden',
  clipPath: 'inset(50%)',
  whiteSpace: 'nowrap',
} as unknown as TextStyle;
