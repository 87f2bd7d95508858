import { useState } from 'react';
import type { ReactNode } from 'react';
import { View } from 'react-native';
import type { LayoutChangeEvent, StyleProp, ViewStyle } from 'react-native';
import { IconButton } from '@/client/components/icon-button';
import { Sheet } from '@/client/components/sheet';
import { useSize } from '@/client/drawings/use-size';
import type { Size } from '@/client/drawings/use-size';

type DrawingProps = {
  /** What the drawing shows, in a sentence or two, for those who do not see it. */
  label: string;
  height: number | 'fill';
  children: (size: Size) => ReactNode;
  style?: StyleProp<ViewStyle>;
};

/** A measured place for an SVG, with its text alternative. */
export function Drawing({ label, height, children, style }: DrawingProps) {
  const [size, onLayout] = useSize();
  return (
    <View
      role="img"
      aria-label={label}
      onLayout={onLayout as (event: LayoutChangeEvent) => void}
      style={[
        { overflow: 'hidden', width: '100%' },
        height === 'fill' ? { flex: 1, minHeight: 0 } : { height },
        style,
      ]}
    >
      {size && size.width > 0 && size.height > 0 ? (
        // What fills its place must not hold it open when that gets smaller.
        <View style={height === 'fill' ? { position: 'absolute', top: 0, left: 0 } : null}>
          {children(size)}
        </View>
      ) : null}
    </View>
  );
}

type TableButtonProps = {
  /** Names the table: "Signal as a table". */
  title: string;
  children: () => ReactNode;
};

/** The table behind a press that every drawing has. Its rows are made when it opens. */
export function TableButton({ title, children }: TableButtonProps) {
  const [open, setOpen] = useState(false);
  return (
    <>
      <IconButton icon="table" label={title} onPress={() => setOpen(true)} />
      <Sheet title={title} open={open} onClose={() => setOpen(false)}>
        {open ? children() : null}
      </Sheet>
    </>
  );
}
