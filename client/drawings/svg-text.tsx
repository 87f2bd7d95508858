import { Text as NativeSvgText } from 'react-native-svg';
import { mono, weights } from '@/client/theme/tokens';
import type { ColourName } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

type SvgTextProps = {
  x: number;
  y: number;
  children: string;
  tone?: ColourName;
  size?: number;
  anchor?: 'start' | 'middle' | 'end';
  code?: boolean;
};

/** Text inside a drawing; `y` is its middle. */
export function SvgText({
  x,
  y,
  children,
  tone = 'scribeSoft',
  size = 12,
  anchor = 'start',
  code,
}: SvgTextProps) {
  return (
    <NativeSvgText
      x={x}
      y={y + size * 0.35}
      fill={useColours()[tone]}
      fontSize={size}
      fontFamily={code ? mono.bold : weights.regular}
      textAnchor={anchor}
      {...equalFigures}
    >
      {children}
    </NativeSvgText>
  );
}

// Only the web knows it in drawings; figures that change must not jump.
const equalFigures = { style: { fontVariantNumeric: 'tabular-nums slashed-zero' } } as object;
