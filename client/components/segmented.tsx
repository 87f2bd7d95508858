import { useId } from 'react';
import { Pressable, useWindowDimensions, View } from 'react-native';
import { moveFocus } from '@/client/components/move-focus';
import type { Option } from '@/client/components/select';
import { Text } from '@/client/components/text';
import { useSize } from '@/client/drawings/use-size';
import { size, space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

type SegmentedProps<V extends string> = {
  label: string;
  value: V;
  options: readonly Option<V>[];
  onChange: (value: V) => void;
  /** The label is spoken only. */
  bare?: boolean;
};

/**
 * One of a few, all of them in sight; in rows of equal cells where one row is too narrow. Arrow keys move, as in any
 * group of radio buttons.
 */
export function Segmented<V extends string>({ label, value, options, onChange, bare }: SegmentedProps<V>) {
  const colours = useColours();
  const id = useId();
  const [room, onLayout] = useSize();
  const { width } = useWindowDimensions();
  const columns = columnsFor(
    options.map((o) => o.label),
    room?.width ?? width,
  );
  const oneRow = columns === options.length;
  return (
    <View style={{ gap: space.xs }}>
      {bare ? null : (
        <Text id={id} size="small" weight="medium">
          {label}
        </Text>
      )}
      <View
        role="radiogroup"
        {...(bare ? { 'aria-label': label } : { 'aria-labelledby': id })}
        {...({ onKeyDown: moveFocus } as object)}
        onLayout={onLayout}
        style={{ flexDirection: 'row', flexWrap: 'wrap', paddingLeft: 1, paddingTop: 1 }}
      >
        {options.map((option) => {
          const on = option.value === value;
          return (
            <Pressable
              key={option.value}
              role="radio"
              aria-checked={on}
              tabIndex={on ? 0 : -1}
              onPress={() => onChange(option.value)}
              style={{
                minHeight: size.button,
                minWidth: size.button,
                flexGrow: 1,
                ...(oneRow ? null : { width: `${100 / columns}%` }),
                alignItems: 'center',
                justifyContent: 'center',
                paddingHorizontal: space.m,
                borderWidth: 1,
                marginLeft: -1,
                marginTop: -1,
                borderColor: on ? colours.dye : colours.scribeSoft,
                backgroundColor: on ? colours.dye : 'transparent',
                zIndex: on ? 1 : 0,
              }}
            >
              <Text weight={on ? 'medium' : 'regular'} tone={on ? 'onDye' : 'scribe'}>
                {option.label}
              </Text>
            </Pressable>
          );
        })}
      </View>
    </View>
  );
}

/** How many stand side by side: all where their labels fit, else as many in every row. */
export function columnsFor(labels: readonly string[], widthPx: number): number {
  const wanted = labels.reduce(
    (sum, label) => sum + Math.max(size.button, label.length * perLetterPx + 26),
    0,
  );
  if (wanted <= widthPx) return labels.length;
  return labels.length > 3 ? Math.ceil(labels.length / 2) : 1;
}

const perLetterPx = 9.5;
