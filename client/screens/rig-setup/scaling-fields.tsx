import { useFormContext } from 'react-hook-form';
import { View } from 'react-native';
import { Text } from '@/client/components/text';
import { adcScaling } from '@/client/screens/rig-setup/adc';
import { numberOf, type RigDraft } from '@/client/screens/rig-setup/draft';
import { FormNumber } from '@/client/screens/rig-setup/form-fields';
import { Pair } from '@/client/screens/rig-setup/pair';
import { space } from '@/client/theme/tokens';

/** Codes to volts. Boards that send volts need none of it. */
export function ScalingFields({ index }: { index: number }) {
  const { getValues, setValue } = useFormContext<RigDraft>();
  const at = `channels.${index}` as const;
  const fill = () => {
    const { adcBits, adcReferenceV } = getValues(at);
    const scaling = adcScaling(numberOf(adcBits), numberOf(adcReferenceV));
    if (!scaling) return;
    for (const name of ['voltsPerCode', 'codeOffset', 'minCode', 'maxCode'] as const) {
      setValue(`${at}.${name}`, String(scaling[name]), { shouldDirty: true, shouldValidate: true });
    }
  };
  return (
    <View style={{ gap: space.l }} role="group" aria-label="Codes to volts">
      <View>
        <Text weight="medium">Codes to volts</Text>
        <Text size="small" tone="scribeSoft">
          Where the board sends volts, leave this as it is. Where it sends codes of its converter, bits and
          reference fill in the rest.
        </Text>
      </View>
      <Pair>
        <FormNumber name={`${at}.adcBits`} label="Converter" unit="bits" optional onTyped={fill} />
        <FormNumber name={`${at}.adcReferenceV`} label="Reference" unit="V" optional onTyped={fill} />
      </Pair>
      <Pair>
        <FormNumber name={`${at}.voltsPerCode`} label="Volts per code" unit="V" />
        <FormNumber name={`${at}.codeOffset`} label="Code at 0 V" />
      </Pair>
      <Pair>
        <FormNumber name={`${at}.minCode`} label="Lowest code" optional />
        <FormNumber name={`${at}.maxCode`} label="Highest code" optional />
      </Pair>
    </View>
  );
}
