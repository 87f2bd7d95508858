import { useFieldArray, useFormContext } from 'react-hook-form';
import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { IconButton } from '@/client/components/icon-button';
import { Text } from '@/client/components/text';
import type { RigDraft } from '@/client/screens/rig-setup/draft';
import { FormNumber, FormSelect } from '@/client/screens/rig-setup/form-fields';
import { Pair } from '@/client/screens/rig-setup/pair';
import { space } from '@/client/theme/tokens';

/** The wheel: positions, gap, gear, and what a pulse's width says. */
export function WheelPart() {
  const sensing = useFormContext<RigDraft>().watch('sensing');
  const threeHall = sensing === 'three-hall';
  return (
    <View style={{ gap: space.l }}>
      <Pair>
        <FormNumber
          name="wheel.pulsesPerTurn"
          label={threeHall ? 'Pole pairs' : 'Pulses per turn'}
          help={threeHall ? 'Pairs of poles of the wheel.' : 'Positions, the missing ones counted.'}
        />
        <FormNumber
          name="wheel.missingPulses"
          label="Missing"
          help="Teeth left out to mark one place; 0 for none."
        />
      </Pair>
      <FormNumber
        name="wheel.gearRatio"
        label="Gear"
        unit="turns"
        help="Turns of the wheel for one turn of the shaft; 1 where the wheel sits on it."
      />
      {sensing === 'width-coded' ? <WidthClasses /> : null}
    </View>
  );
}

const meanings = [
  { value: 'forward', label: 'forward' },
  { value: 'reverse', label: 'reverse' },
  { value: 'weak', label: 'weak field' },
] as const;

function WidthClasses() {
  const { control, formState } = useFormContext<RigDraft>();
  const { fields, append, remove } = useFieldArray({ control, name: 'wheel.widthClasses' });
  const problem = formState.errors.wheel?.widthClasses?.root?.message;
  return (
    <View style={{ gap: space.m }} role="group" aria-label="Pulse widths">
      <Text weight="medium">Pulse widths</Text>
      {fields.map((field, i) => (
        <View key={field.id} style={{ flexDirection: 'row', gap: space.s, alignItems: 'flex-end' }}>
          <View style={{ flex: 1, minWidth: 0 }}>
            <FormNumber name={`wheel.widthClasses.${i}.widthUs`} label="Width" unit="µs" />
          </View>
          <View style={{ flex: 1, minWidth: 0 }}>
            <FormSelect name={`wheel.widthClasses.${i}.means`} label="Means" options={meanings} />
          </View>
          <IconButton
            icon="trash"
            label={`Take off width ${i + 1}`}
            kind="outlined"
            onPress={() => remove(i)}
          />
        </View>
      ))}
      {problem ? (
        <Text size="small" tone="fault" role="alert">
          {problem}
        </Text>
      ) : null}
      <Button label="Add a width" icon="plus" onPress={() => append({ widthUs: '', means: 'weak' })} />
    </View>
  );
}
