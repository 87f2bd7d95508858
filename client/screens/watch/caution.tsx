import { Button } from '@/client/components/button';
import { Sheet } from '@/client/components/sheet';
import { Text } from '@/client/components/text';
import { changePreferences } from '@/client/theme/preferences';
import { usePreferences } from '@/client/theme/use-theme';

/** Always on Watch. */
export function CautionLine() {
  return (
    <Text size="tiny" tone="scribeSoft" role="note">
      Rotating parts can hurt. Guard the rig and keep clear; this is a bench instrument, not a safety
      function.
    </Text>
  );
}

/** Before the first Watch in this browser. */
export function CautionSheet() {
  const { cautionSeen } = usePreferences();
  const seen = () => changePreferences({ cautionSeen: true });
  return (
    <Sheet
      title="Before you watch a rig"
      open={!cautionSeen}
      onClose={seen}
      actions={<Button kind="filled" label="I have read it" onPress={seen} />}
    >
      <Text>
        Rotating parts hurt people. Guard the rig, keep hair, sleeves and hands clear, and stop it before you
        reach in.
      </Text>
      <Text>
        Turnmark is a bench instrument. It is no safety function: do not use it for overspeed protection, nor
        for any measurement that the law asks for. A speed of zero on this page does not mean that the shaft
        stands still.
      </Text>
      <Text tone="scribeSoft">Local codes and qualified people decide what your rig needs.</Text>
    </Sheet>
  );
}
