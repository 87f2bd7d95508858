import type { ReactNode } from 'react';
import { View } from 'react-native';
import type { StyleProp, ViewStyle } from 'react-native';
import { Line, Svg } from 'react-native-svg';
import type { ColourName } from '@/client/theme/tokens';
import { size, space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

type PlateProps = {
  children: ReactNode;
  /** A 4 px edge at the left that says how bad it is; never the only sign. */
  edge?: ColourName;
  raised?: boolean;
  flush?: boolean;
  role?: 'region' | 'group' | 'article' | 'listitem';
  label?: string;
  style?: StyleProp<ViewStyle>;
};

/** A card: square corners, the top right one knocked off, a hairline, no shadow. */
export function Plate({ children, edge, raised, flush, role, label, style }: PlateProps) {
  const colours = useColours();
  const c = size.chamfer;
  return (
    <View
      {...(role ? { role } : {})}
      {...(label ? { 'aria-label': label } : {})}
      style={[
        {
          backgroundColor: raised ? colours.plateRaised : colours.plate,
          borderColor: colours.hairline,
          borderWidth: 1,
          padding: flush ? 0 : space.l,
        },
        edge ? { borderLeftWidth: 4, borderLeftColor: colours[edge] } : null,
        knockedOff,
        style,
      ]}
    >
      {children}
      <View style={{ position: 'absolute', top: -1, right: -1, pointerEvents: 'none' }}>
        <Svg width={c + 1} height={c + 1} aria-hidden>
          <Line x1={0.5} y1={0} x2={c + 1} y2={c + 0.5} stroke={colours.hairline} strokeWidth={1.5} />
        </Svg>
      </View>
    </View>
  );
}

const knockedOff = {
  clipPath: `polygon(0 0, calc(100% - ${size.chamfer}px) 0, 100% ${size.chamfer}px, 100% 100%, 0 100%)`,
} as unknown as ViewStyle;
