import { useId } from 'react';
import { Pressable, View } from 'react-native';
import { Text } from '@/client/components/text';
import { size, space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

type SwitchProps = {
  label: string;
  help?: string;
  value: boolean;
  onChange: (value: boolean) => void;
  disabled?: boolean;
};

/** On or off; says so in its shape too: the filled block stands right and the frame is filled. */
export function Switch({ label, help, value, onChange, disabled }: SwitchProps) {
  const colours = useColours();
  const id = useId();
  return (
    <Pressable
      role="switch"
      aria-checked={value}
      aria-label={label}
      {...(help ? { 'aria-describedby': id } : {})}
      aria-disabled={disabled}
      disabled={disabled}
      onPress={() => onChange(!value)}
      style={{
        minHeight: size.target,
        flexDirection: 'row',
        alignItems: 'center',
        gap: space.m,
        opacity: disabled ? 0.5 : 1,
      }}
    >
      <View
        style={{
          width: 44,
          height: 24,
          borderWidth: 1,
          borderColor: value ? colours.dye : colours.scribeSoft,
          backgroundColor: value ? colours.dye : 'transparent',
          alignItems: value ? 'flex-end' : 'flex-start',
          padding: 3,
        }}
      >
        <View
          style={{ width: 16, height: 16, backgroundColor: value ? colours.onDye : colours.scribeSoft }}
        />
      </View>
      <View style={{ flex: 1 }}>
        <Text>{label}</Text>
        {help ? (
          <Text id={id} size="small" tone="scribeSoft">
            {help}
          </Text>
        ) : null}
      </View>
    </Pressable>
  );
}
