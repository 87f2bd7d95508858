import type { Ref } from 'react';
import { TextInput, View } from 'react-native';
import type { TextInputProps } from 'react-native';
import { Field } from '@/client/components/field';
import type { FieldProps } from '@/client/components/field';
import { Text } from '@/client/components/text';
import { mono, size, space, type, weights } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

type TextFieldProps = FieldProps & {
  value: string;
  onChange: (value: string) => void;
  onBlur?: () => void;
  onSubmit?: () => void;
  /** Stands at the right inside the field. */
  unit?: string;
  kind?: 'text' | 'email' | 'password' | 'new-password' | 'number' | 'search';
  /** More than 1: a text of several lines. */
  rows?: number;
  code?: boolean;
  placeholder?: string;
  disabled?: boolean;
  maxLength?: number;
  autoFocus?: boolean;
  ref?: Ref<TextInput>;
};

export function TextField({ label, help, error, optional, ...rest }: TextFieldProps) {
  const colours = useColours();
  const {
    value,
    onChange,
    onBlur,
    onSubmit,
    unit,
    kind = 'text',
    rows = 1,
    code,
    disabled,
    ref,
    ...native
  } = rest;
  return (
    <Field label={label} help={help} error={error} optional={optional}>
      {({ id, describedBy, invalid }) => (
        <View style={{ justifyContent: 'center' }}>
          <TextInput
            ref={ref}
            id={id}
            {...kinds[kind]}
            {...native}
            {...({
              'aria-describedby': describedBy,
              'aria-invalid': invalid,
              'aria-required': !optional && kind !== 'search',
            } as object)}
            value={value}
            onChangeText={onChange}
            onBlur={onBlur}
            onSubmitEditing={onSubmit}
            editable={!disabled}
            multiline={rows > 1}
            numberOfLines={rows}
            placeholderTextColor={colours.scribeSoft}
            style={{
              minHeight: rows > 1 ? rows * 24 + 24 : size.button,
              borderWidth: invalid ? 2 : 1,
              borderColor: invalid ? colours.fault : colours.scribeSoft,
              backgroundColor: colours.plateRaised,
              color: colours.scribe,
              fontFamily: code ? mono.regular : weights.regular,
              fontSize: type.body,
              paddingHorizontal: space.m,
              paddingVertical: rows > 1 ? space.m : 0,
              paddingRight: unit ? 24 + unit.length * 9 : space.m,
              opacity: disabled ? 0.6 : 1,
            }}
          />
          {unit ? (
            <View style={{ position: 'absolute', right: space.m, pointerEvents: 'none' }}>
              <Text tone="scribeSoft" size="small">
                {unit}
              </Text>
            </View>
          ) : null}
        </View>
      )}
    </Field>
  );
}

const kinds: Record<NonNullable<TextFieldProps['kind']>, TextInputProps> = {
  text: { autoComplete: 'off' },
  search: { autoComplete: 'off', inputMode: 'search' },
  email: { autoComplete: 'username' as never, inputMode: 'email', autoCapitalize: 'none' },
  password: { autoComplete: 'current-password', secureTextEntry: true },
  'new-password': { autoComplete: 'new-password', secureTextEntry: true },
  number: { autoComplete: 'off', inputMode: 'decimal' },
};
