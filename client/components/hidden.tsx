import { Text } from 'react-native';
import type { TextStyle } from 'react-native';

type HiddenProps = {
  children: string;
  /** Reads changes out when nothing else is said. */
  polite?: boolean;
  id?: string;
};

/** For screen readers only. */
export function Hidden({ children, polite, id }: HiddenProps) {
  return (
    <Text id={id} {...(polite ? { role: 'status' as never } : {})} style={unseen}>
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
