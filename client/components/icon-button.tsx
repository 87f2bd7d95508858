import { Pressable } from 'react-native';
import type { StyleProp, ViewStyle } from 'react-native';
import { Icon } from '@/client/components/icon';
import type { IconName } from '@/client/components/icon';
import { size } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

type IconButtonProps = {
  icon: IconName;
  /** Spoken name, and the tip on hover. */
  label: string;
  onPress: () => void;
  kind?: 'quiet' | 'outlined' | 'filled';
  disabled?: boolean;
  pressed?: boolean;
  style?: StyleProp<ViewStyle>;
};

export function IconButton({
  icon,
  label,
  onPress,
  kind = 'quiet',
  disabled,
  pressed,
  style,
}: IconButtonProps) {
  const colours = useColours();
  const filled = kind === 'filled' || pressed === true;
  return (
    <Pressable
      role="button"
      aria-label={label}
      aria-disabled={disabled}
      disabled={disabled}
      {...(pressed !== undefined ? ({ 'aria-pressed': pressed } as object) : {})}
      {...({ dataSet: { tip: label } } as object)}
      onPress={onPress}
      style={({ pressed: down }) => [
        {
          minWidth: kind === 'quiet' ? size.target : size.button,
          minHeight: kind === 'quiet' ? size.target : size.button,
          alignItems: 'center',
          justifyContent: 'center',
          borderWidth: kind === 'quiet' ? 0 : 1,
          borderColor: filled ? colours.dye : colours.scribeSoft,
          opacity: disabled ? 0.5 : down ? 0.75 : 1,
        },
        filled ? { backgroundColor: colours.dye } : null,
        style,
      ]}
    >
      <Icon name={icon} tone={filled ? 'onDye' : 'scribe'} />
    </Pressable>
  );
}
