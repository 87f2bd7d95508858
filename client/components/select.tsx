import { createElement } from 'react';
import { View } from 'react-native';
import { Field } from '@/client/components/field';
import type { FieldProps } from '@/client/components/field';
import { Icon } from '@/client/components/icon';
import { size, space, type, weights } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

export type Option<V extends string> = { value: V; label: string };

type SelectProps<V extends string> = FieldProps & {
  value: V;
  options: readonly Option<V>[];
  onChange: (value: V) => void;
  disabled?: boolean;
};

/** The browser's own list: a phone shows its own picker, a screen reader knows it. */
export function Select<V extends string>({ label, help, error, optional, ...control }: SelectProps<V>) {
  return (
    <Field label={label} help={help} error={error} optional={optional}>
      {(parts) => (
        <BareSelect {...control} id={parts.id} describedBy={parts.describedBy} invalid={parts.invalid} />
      )}
    </Field>
  );
}

type BareSelectProps<V extends string> = {
  value: V;
  options: readonly Option<V>[];
  onChange: (value: V) => void;
  /** Needed where no label element stands beside it. */
  label?: string;
  id?: string | undefined;
  describedBy?: string | undefined;
  invalid?: boolean;
  disabled?: boolean;
  height?: number;
};

/** Without label, help and error: for bars of controls, named by `label`. */
export function BareSelect<V extends string>({
  value,
  options,
  onChange,
  label,
  id,
  ...rest
}: BareSelectProps<V>) {
  const colours = useColours();
  const { describedBy, invalid, disabled, height = size.button } = rest;
  const list = createElement(
    'select',
    {
      id,
      value,
      disabled,
      'aria-label': label,
      'aria-describedby': describedBy,
      'aria-invalid': invalid,
      onChange: (event: { target: { value: string } }) => onChange(event.target.value as V),
      style: {
        appearance: 'none',
        width: '100%',
        minHeight: height,
        padding: `0 ${space.xxl}px 0 ${space.m}px`,
        border: `${invalid ? 2 : 1}px solid ${invalid ? colours.fault : colours.scribeSoft}`,
        borderRadius: 0,
        background: colours.plateRaised,
        color: colours.scribe,
        font: `${type.body}px ${weights.regular}`,
        textOverflow: 'ellipsis',
        opacity: disabled ? 0.6 : 1,
      },
    },
    options.map((o) => createElement('option', { key: o.value, value: o.value }, o.label)),
  );
  return (
    <View style={{ justifyContent: 'center' }}>
      {list}
      <View style={{ position: 'absolute', right: space.s, pointerEvents: 'none' }}>
        <Icon name="down" size={20} tone="scribeSoft" />
      </View>
    </View>
  );
}
