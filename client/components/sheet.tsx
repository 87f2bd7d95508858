import { useId } from 'react';
import type { ReactNode } from 'react';
import { Modal, Pressable, ScrollView, View } from 'react-native';
import { IconButton } from '@/client/components/icon-button';
import { Text } from '@/client/components/text';
import { space } from '@/client/theme/tokens';
import { useColours, useWide } from '@/client/theme/use-theme';

type SheetProps = {
  title: string;
  open: boolean;
  onClose: () => void;
  children: ReactNode;
  /** Buttons at the bottom; they stay in sight while the body scrolls. */
  actions?: ReactNode;
};

/** Rises from the bottom of a phone, stands in the middle of a wide screen. Escape and a press beside it close it. */
export function Sheet({ title, open, onClose, children, actions }: SheetProps) {
  const colours = useColours();
  const wide = useWide();
  const id = useId();
  return (
    <Modal
      visible={open}
      transparent
      animationType="none"
      onRequestClose={onClose}
      {...({ 'aria-labelledby': id } as object)}
    >
      <View style={{ flex: 1, justifyContent: wide ? 'center' : 'flex-end', alignItems: 'center' }}>
        <Pressable
          aria-hidden
          tabIndex={-1}
          onPress={onClose}
          style={{
            position: 'absolute',
            top: 0,
            right: 0,
            bottom: 0,
            left: 0,
            backgroundColor: 'rgba(5,9,32,0.55)',
          }}
        />
        <View
          style={{
            width: '100%',
            maxWidth: wide ? 560 : 720,
            maxHeight: '92%',
            backgroundColor: colours.plateRaised,
            borderWidth: 1,
            borderColor: colours.hairline,
          }}
        >
          <View
            style={{
              flexDirection: 'row',
              alignItems: 'center',
              paddingLeft: space.l,
              paddingRight: space.xs,
              paddingTop: space.s,
              gap: space.s,
            }}
          >
            <Text id={id} heading={2} size="lead" weight="medium" style={{ flex: 1 }}>
              {title}
            </Text>
            <IconButton icon="close" label="Close" onPress={onClose} />
          </View>
          <ScrollView style={{ flexShrink: 1 }} contentContainerStyle={{ padding: space.l, gap: space.l }}>
            {children}
          </ScrollView>
          {actions ? (
            <View
              style={{
                flexDirection: 'row',
                flexWrap: 'wrap',
                justifyContent: 'flex-end',
                gap: space.s,
                padding: space.l,
                borderTopWidth: 1,
                borderTopColor: colours.hairline,
              }}
            >
              {actions}
            </View>
          ) : null}
        </View>
      </View>
    </Modal>
  );
}
