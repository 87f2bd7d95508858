import { useState } from 'react';
import type { LayoutChangeEvent } from 'react-native';

export type Size = { width: number; height: number };

/** The size that layout gives a drawing; null before the first layout. */
export function useSize(): [Size | null, (event: LayoutChangeEvent) => void] {
  const [size, setSize] = useState<Size | null>(null);
  const onLayout = (event: LayoutChangeEvent) => {
    const width = Math.round(event.nativeEvent.layout.width);
    const height = Math.round(event.nativeEvent.layout.height);
    if (width !== size?.width || height !== size?.height) setSize({ width, height });
  };
  return [size, onLayout];
}
