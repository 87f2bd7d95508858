import type { Ref } from 'react';
import { ActivityIndicator, Pressable } from 'react-native';
import type { StyleProp, View, ViewStyle } from 'react-native';
import { Icon } from '@/client/components/icon';
import type { IconName } from '@/client/components/icon';
import { Text } from '@/client/components/text';
import { size, space } from '@/client/theme/tokens';
import type { ColourName, Colours } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

export type ButtonKind = 'filled' | 'outlined' | 'destructive' | 'quiet';

export type ButtonProps = {
  label: string;
  onPress: () => void;
  kind?: ButtonKind;
  icon?: IconName;
  /** Says more than the label where the label alone would be unclear out of its place; must contain the label. */
  longLabel?: string;
  disabled?: boolean;
  busy?: boolean;
  /** Toggle: pressed or not. */
  pressed?: boolean;
  expanded?: boolean;
  tall?: boolean;
  style?: StyleProp<ViewStyle>;
  ref?: Ref<View>;
};

/** 48 px high; one filled button a screen, the others outlined. */
export function Button({
  label,
  onPress,
  kind = 'outlined',
  icon,
  longLabel,
  disabled,
  busy,
  ...rest
}: ButtonProps) {
  const colours = useColours();
  const { pressed, expanded, tall, style, ref } = rest;
  const off = disabled || busy;
  const shown = pressed ? 'filled' : kind;
  const tone = tones[shown];
  return (
    <Pressable
      ref={ref}
      role="button"
      aria-label={longLabel ?? label}
      aria-disabled={off}
      disabled={off}
      {...(pressed !== undefined ? ({ 'aria-pressed': pressed } as object) : {})}
      {...(expanded !== undefined ? { 'aria-expanded': expanded } : {})}
      {...(busy ? { 'aria-busy': true } : {})}
      onPress={onPress}
      style={({ pressed: down }) => [
        base,
        kind === 'quiet' ? quiet : null,
        {
          minHeight: tall ? size.keep : kind === 'quiet' ? size.target : size.button,
          ...surface(shown, colours),
        },
        { opacity: disabled ? 0.5 : down ? 0.75 : 1 },
        style,
      ]}
    >
      {busy ? (
        <ActivityIndicator size="small" aria-label="Working" color={colours[tone]} />
      ) : icon ? (
        <Icon name={icon} tone={tone} size={20} />
      ) : null}
      <Text
        weight="medium"
        size={tall ? 'lead' : 'body'}
        tone={tone}
        style={{ textAlign: 'center', flexShrink: 1 }}
      >
        {label}
      </Text>
    </Pressable>
  );
}

const tones: Record<ButtonKind, ColourName> = {
  filled: 'onDye',
  outlined: 'scribe',
  destructive: 'fault',
  quiet: 'dye',
};

function surface(kind: ButtonKind, colours: Colours): ViewStyle {
  if (kind === 'filled') return { backgroundColor: colours.dye, borderColor: colours.dye };
  if (kind === 'quiet') return { borderColor: 'transparent' };
  return { borderColor: kind === 'destructive' ? colours.fault : colours.scribeSoft };
}

const base: ViewStyle = {
  flexDirection: 'row',
  alignItems: 'center',
  justifyContent: 'center',
  gap: space.s,
  paddingHorizontal: space.l,
  paddingVertical: space.s,
  borderWidth: 1,
};
const quiet: ViewStyle = { paddingHorizontal: space.xs, minWidth: size.target };
