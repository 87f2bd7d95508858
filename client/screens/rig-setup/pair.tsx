import type { ReactNode } from 'react';
import { View } from 'react-native';
import type { ViewStyle } from 'react-native';
import { FieldRows } from '@/client/components/field';
import { space } from '@/client/theme/tokens';

/**
 * Fields beside each other where each has `least` px, under each other where not. Controls stand level, however many lines
 * the words above or the error below one of them take.
 */
export function Pair({ children, least = 150 }: { children: ReactNode[]; least?: number }) {
  return (
    <FieldRows value>
      <View style={gridOf(least)}>
        {children.map((child, i) => (
          <View key={i} style={cell}>
            {child}
          </View>
        ))}
      </View>
    </FieldRows>
  );
}

const belowPx = space.m;

// A grid is the web's own: no other layout sets two columns level line by line.
const gridOf = (least: number) =>
  ({
    display: 'grid',
    gridTemplateColumns: `repeat(auto-fit, minmax(min(${least}px, 100%), 1fr))`,
    columnGap: space.l,
    rowGap: space.xs,
    // Below each control stands the gap to the next field.
    marginBottom: -belowPx,
  }) as unknown as ViewStyle;

const cell = {
  display: 'grid',
  gridTemplateRows: 'subgrid',
  gridRow: 'span 2',
  minWidth: 0,
  paddingBottom: belowPx,
} as unknown as ViewStyle;
