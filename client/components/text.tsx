import type { ReactNode, Ref } from 'react';
import { Text as NativeText } from 'react-native';
import type { StyleProp, TextStyle } from 'react-native';
import { mono, type, weights } from '@/client/theme/tokens';
import type { ColourName, TypeSize, Weight } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

export type TextProps = {
  children?: ReactNode;
  size?: TypeSize;
  weight?: Weight;
  tone?: ColourName;
  /** Figures of equal width with a slashed zero: for every number that changes. */
  figures?: boolean;
  /** Space Mono: code and keys. */
  code?: boolean;
  /** Makes it a heading of that level. */
  heading?: 1 | 2 | 3;
  lines?: number;
  id?: string;
  role?: 'status' | 'alert' | 'note';
  label?: string;
  style?: StyleProp<TextStyle>;
  ref?: Ref<NativeText>;
};

/** All text goes through here: face, size, tone and the features of figures. */
export function Text({ children, size = 'body', weight = 'regular', tone = 'scribe', ...rest }: TextProps) {
  const colours = useColours();
  const { figures, code, heading, lines, label, role, style, ...native } = rest;
  return (
    <NativeText
      {...native}
      {...(heading
        ? ({ role: 'heading', 'aria-level': heading } as object)
        : role
          ? { role: role as never }
          : {})}
      {...(label ? { 'aria-label': label } : {})}
      {...(lines ? { numberOfLines: lines } : {})}
      style={[
        {
          color: colours[tone],
          fontSize: type[size],
          lineHeight: lineHeights[size],
          fontFamily: code ? mono[weight === 'regular' ? 'regular' : 'bold'] : weights[weight],
        },
        code ? breakAnywhere : breakWords,
        figures ? slashed : null,
        style,
      ]}
    >
      {children}
    </NativeText>
  );
}

const lineHeights: Record<TypeSize, number> = {
  tiny: 16,
  small: 20,
  body: 24,
  lead: 26,
  title: 34,
  large: 44,
  speed: 76,
};

// Features and wrapping that only the web knows by these names.
const slashed = { fontVariant: ['tabular-nums', 'slashed-zero'] } as unknown as TextStyle;
const breakWords = { overflowWrap: 'anywhere', textWrap: 'pretty' } as unknown as TextStyle;
const breakAnywhere = { wordBreak: 'break-all' } as unknown as TextStyle;

/** Figures of equal width without the slash: the big speed. */
export const plainFigures: TextStyle = { fontVariant: ['tabular-nums'] };
