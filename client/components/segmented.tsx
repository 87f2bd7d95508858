import { useId } from 'react';
import { Pressable, View } from 'react-native';
import { moveFocus } from '@/client/components/move-focus';
import type { Option } from '@/client/components/select';
import { Text } from '@/client/components/text';
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

/** One of a few, all of them in sight. Arrow keys move, as in any group of radio buttons. */
export function Segmented<V extends string>({ label, value, options, onChange, bare }: SegmentedProps<V>) {
  const colours = useColours();
  const id = useId();
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
        style={{ flexDirection: 'row', flexWrap: 'wrap' }}
      >
        {options.map((option, i) => {
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
                alignItems: 'center',
                justifyContent: 'center',
                paddingHorizontal: space.m,
                borderWidth: 1,
                marginLeft: i === 0 ? 0 : -1,
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
