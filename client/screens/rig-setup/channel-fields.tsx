import { useFormContext } from 'react-hook-form';
import { View } from 'react-native';
import { IconButton } from '@/client/components/icon-button';
import { Plate } from '@/client/components/plate';
import { Text } from '@/client/components/text';
import type { ChannelRole } from '@/signal/model';
import type { RigDraft } from '@/client/screens/rig-setup/draft';
import { FormNumber, FormSelect, FormText } from '@/client/screens/rig-setup/form-fields';
import { Pair } from '@/client/screens/rig-setup/pair';
import { roleWords } from '@/client/screens/rig-setup/roles';
import { ScalingFields } from '@/client/screens/rig-setup/scaling-fields';
import { SensorFields } from '@/client/screens/rig-setup/sensor-fields';
import { VoltageCaution } from '@/client/screens/rig-setup/voltage-caution';
import { space } from '@/client/theme/tokens';

const roles = (Object.keys(roleWords) as ChannelRole[]).map((value) => ({ value, label: roleWords[value] }));

/** One channel: what it is called, what it counts for, what its volts mean and what it stands. */
export function ChannelFields({ index, onRemove }: { index: number; onRemove: (() => void) | null }) {
  const name = useFormContext<RigDraft>().watch(`channels.${index}.name`);
  const title = name ? `Channel ${name}` : `Channel ${index + 1}`;
  const at = `channels.${index}` as const;
  return (
    <Plate role="group" label={title} style={{ gap: space.l }}>
      <View style={{ flexDirection: 'row', alignItems: 'center' }}>
        <Text heading={3} weight="medium" style={{ flex: 1 }} lines={1}>
          {title}
        </Text>
        {onRemove ? <IconButton icon="trash" label={`Take off ${title}`} onPress={onRemove} /> : null}
      </View>
      <Pair>
        <FormText name={`${at}.name`} label="Name" help="As the board sends it." maxLength={16} />
        <FormSelect name={`${at}.role`} label="Role" options={roles} />
      </Pair>
      <SensorFields index={index} />
      <ScalingFields index={index} />
      <FormNumber
        name={`${at}.maxInputV`}
        label="Highest input"
        unit="V"
        optional
        help="What the board's input takes without harm, by its maker's data."
      />
      <VoltageCaution index={index} />
    </Plate>
  );
}
