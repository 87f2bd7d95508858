import { useFormContext } from 'react-hook-form';
import { View } from 'react-native';
import { FaultShape, WarnShape } from '@/client/components/shapes';
import { Text } from '@/client/components/text';
import { numberOf, type RigDraft } from '@/client/screens/rig-setup/draft';
import { overVoltage } from '@/client/screens/rig-setup/over-voltage';
import { space } from '@/client/theme/tokens';

/** What too many volts do, and whether this sensor can give them. */
export function VoltageCaution({ index }: { index: number }) {
  const channel = useFormContext<RigDraft>().watch(`channels.${index}`);
  const over = overVoltage(numberOf(channel.sensor.supplyV), numberOf(channel.maxInputV));
  return (
    <View role={over ? 'alert' : 'note'} style={{ flexDirection: 'row', gap: space.s }}>
      <View style={{ paddingTop: 1 }}>{over ? <FaultShape /> : <WarnShape />}</View>
      <Text size="small" tone={over ? 'fault' : 'scribeSoft'} style={{ flex: 1 }}>
        {over ??
          'Volts above the highest input destroy the board. Check the wiring with a meter before you connect.'}
      </Text>
    </View>
  );
}
