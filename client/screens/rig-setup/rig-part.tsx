import { useFormContext } from 'react-hook-form';
import { View } from 'react-native';
import { Segmented } from '@/client/components/segmented';
import { Text } from '@/client/components/text';
import type { Sensing } from '@/signal/model';
import type { RigDraft } from '@/client/screens/rig-setup/draft';
import { FormText } from '@/client/screens/rig-setup/form-fields';
import { channelsFor, sensingWords } from '@/client/screens/rig-setup/roles';
import { space } from '@/client/theme/tokens';

const options = (Object.keys(sensingWords) as Sensing[]).map((value) => ({
  value,
  label: sensingWords[value].label,
}));

/** What the rig is called and how its sensors see the wheel. */
export function RigPart() {
  const { watch, setValue, getValues } = useFormContext<RigDraft>();
  const sensing = watch('sensing');
  const choose = (next: Sensing) => {
    setValue('sensing', next, { shouldDirty: true });
    setValue('channels', channelsFor(next, getValues('channels')), {
      shouldDirty: true,
      shouldValidate: false,
    });
    if (next === 'width-coded' && getValues('wheel.widthClasses').length === 0) {
      setValue('wheel.widthClasses', [
        { widthUs: '', means: 'forward' },
        { widthUs: '', means: 'reverse' },
      ]);
    }
  };
  return (
    <View style={{ gap: space.l }}>
      <FormText name="name" label="Name of the rig" help="As people in the lab call it." maxLength={80} />
      <View style={{ gap: space.s }}>
        <Segmented label="Sensing" value={sensing} options={options} onChange={choose} />
        <Text size="small" tone="scribeSoft">
          {sensingWords[sensing].help}
        </Text>
      </View>
    </View>
  );
}
