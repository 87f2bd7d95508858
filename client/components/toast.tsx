import { createContext, useCallback, useContext, useEffect, useState } from 'react';
import type { ReactNode } from 'react';
import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { IconButton } from '@/client/components/icon-button';
import { Text } from '@/client/components/text';
import { size, space } from '@/client/theme/tokens';
import { useColours, useWide } from '@/client/theme/use-theme';

export type ToastMessage = { text: string; actionLabel?: string; onAction?: () => void };
const ToastContext = createContext<(message: ToastMessage) => void>(() => undefined);
const shownMs = 12_000;

/** Says what was done, with its undo. The newest message replaces the one before. */
export function ToastProvider({ children }: { children: ReactNode }) {
  const [message, setMessage] = useState<(ToastMessage & { key: number }) | null>(null);
  const show = useCallback(
    (next: ToastMessage) => setMessage((before) => ({ ...next, key: (before?.key ?? 0) + 1 })),
    [],
  );
  const close = () => setMessage(null);

  useEffect(() => {
    if (!message) return undefined;
    const timer = setTimeout(() => setMessage(null), shownMs);
    return () => clearTimeout(timer);
  }, [message]);

  return (
    <ToastContext value={show}>
      {children}
      <ToastPlace>{message ? <Toast message={message} onClose={close} /> : null}</ToastPlace>
    </ToastContext>
  );
}

/** `toast({ text, actionLabel: 'Undo', onAction })` */
export function useToast(): (message: ToastMessage) => void {
  return useContext(ToastContext);
}

function ToastPlace({ children }: { children: ReactNode }) {
  const wide = useWide();
  return (
    <View
      role="status"
      style={{
        position: 'absolute',
        left: 0,
        right: 0,
        bottom: wide ? space.xl : 152,
        alignItems: 'center',
        pointerEvents: 'box-none',
        paddingHorizontal: space.l,
      }}
    >
      {children}
    </View>
  );
}

function Toast({ message, onClose }: { message: ToastMessage; onClose: () => void }) {
  const colours = useColours();
  const { text, actionLabel, onAction } = message;
  return (
    <View
      style={{
        flexDirection: 'row',
        alignItems: 'center',
        gap: space.s,
        maxWidth: 560,
        minHeight: size.button,
        paddingLeft: space.l,
        backgroundColor: colours.plateRaised,
        borderWidth: 1,
        borderColor: colours.scribeSoft,
      }}
    >
      <Text size="small" style={{ flexShrink: 1, paddingVertical: space.s }}>
        {text}
      </Text>
      {actionLabel && onAction ? (
        <Button
          kind="quiet"
          label={actionLabel}
          onPress={() => {
            onClose();
            onAction();
          }}
        />
      ) : null}
      <IconButton icon="close" label="Close message" onPress={onClose} />
    </View>
  );
}
