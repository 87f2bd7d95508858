import { Controller, useFormContext } from 'react-hook-form';
import type { FieldPath } from 'react-hook-form';
import { Select, type Option } from '@/client/components/select';
import { TextField } from '@/client/components/text-field';
import type { RigDraft } from '@/client/screens/rig-setup/draft';

type Path = FieldPath<RigDraft>;

type FormTextProps = {
  name: Path;
  label: string;
  help?: string;
  optional?: boolean;
  unit?: string;
  kind?: 'text' | 'number';
  maxLength?: number;
  /** Told of what was typed, after the form has it. */
  onTyped?: (text: string) => void;
};

/** A text field of the form; numbers stay as typed until the whole is checked. */
export function FormText({ name, onTyped, ...field }: FormTextProps) {
  const { control } = useFormContext<RigDraft>();
  return (
    <Controller
      control={control}
      name={name}
      render={({ field: { value, onChange, onBlur, ref }, fieldState }) => (
        <TextField
          {...field}
          ref={ref}
          value={typeof value === 'string' ? value : ''}
          onChange={(text) => {
            onChange(text);
            onTyped?.(text);
          }}
          onBlur={onBlur}
          error={fieldState.error?.message}
        />
      )}
    />
  );
}

export function FormNumber(props: Omit<FormTextProps, 'kind' | 'maxLength'>) {
  return <FormText {...props} kind="number" maxLength={20} />;
}

type FormSelectProps<V extends string> = {
  name: Path;
  label: string;
  help?: string;
  options: readonly Option<V>[];
};

export function FormSelect<V extends string>({ name, ...field }: FormSelectProps<V>) {
  const { control } = useFormContext<RigDraft>();
  return (
    <Controller
      control={control}
      name={name}
      render={({ field: { value, onChange }, fieldState }) => (
        <Select {...field} value={value as V} onChange={onChange} error={fieldState.error?.message} />
      )}
    />
  );
}
