import { createContext, createElement, useContext, useId } from 'react';
import type { ReactNode } from 'react';
import { View } from 'react-native';
import type { ViewStyle } from 'react-native';
import { Text } from '@/client/components/text';
import { space } from '@/client/theme/tokens';

export type FieldProps = {
  label: string;
  /** What to type and why; stands under the label. */
  help?: string;
  error?: string | null | undefined;
  optional?: boolean;
};

/** Within it the two halves of a field, its words and its control, are cells of the rows around it. */
export const FieldRows = createContext(false);

type FieldParts = { id: string; describedBy: string | undefined; invalid: boolean };

/** Label, help and error around one control; the control gets the ids that tie them together. */
export function Field({
  label,
  help,
  error,
  optional,
  children,
}: FieldProps & { children: (parts: FieldParts) => ReactNode }) {
  const id = useId();
  const described = [help ? `${id}-help` : null, error ? `${id}-error` : null].filter(Boolean).join(' ');
  const inRows = useContext(FieldRows);
  return (
    <View style={inRows ? cells : { gap: space.xs }}>
      <View style={{ gap: space.xs, justifyContent: 'flex-end' }}>
        <FieldLabel htmlFor={id}>
          <Text size="small" weight="medium">
            {label}
            {optional ? (
              <Text size="small" tone="scribeSoft">
                {' '}
                (optional)
              </Text>
            ) : null}
          </Text>
        </FieldLabel>
        {help ? (
          <Text id={`${id}-help`} size="small" tone="scribeSoft">
            {help}
          </Text>
        ) : null}
      </View>
      <View style={{ gap: space.xs }}>
        {children({ id, describedBy: described || undefined, invalid: Boolean(error) })}
        {error ? (
          <Text id={`${id}-error`} size="small" tone="fault" role="alert">
            {error}
          </Text>
        ) : null}
      </View>
    </View>
  );
}

// React Native has no label element; on the web a press on it must reach the control.
function FieldLabel({ htmlFor, children }: { htmlFor: string; children: ReactNode }) {
  return createElement('label', { htmlFor }, children);
}

const cells = { display: 'contents' } as ViewStyle;
