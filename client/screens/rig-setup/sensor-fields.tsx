import { useFormContext } from 'react-hook-form';
import { View } from 'react-native';
import { Switch } from '@/client/components/switch';
import type { SensorKind } from '@/signal/model';
import type { RigDraft } from '@/client/screens/rig-setup/draft';
import { FormNumber, FormSelect } from '@/client/screens/rig-setup/form-fields';
import { Pair } from '@/client/screens/rig-setup/pair';
import { space } from '@/client/theme/tokens';

const kinds: { value: SensorKind; label: string }[] = [
  { value: 'linear', label: 'Linear: volts follow the field' },
  { value: 'switch', label: 'Switch: on near one pole' },
  { value: 'latch', label: 'Latch: one pole on, the other off' },
  { value: 'omnipolar', label: 'Switch: on near either pole' },
];

/** The sensor of a channel; each kind has its own figures. */
export function SensorFields({ index }: { index: number }) {
  const { watch, setValue } = useFormContext<RigDraft>();
  const at = `channels.${index}.sensor` as const;
  const sensor = watch(at);
  return (
    <View style={{ gap: space.l }}>
      <Pair least={200}>
        <FormSelect name={`${at}.kind`} label="Sensor" options={kinds} />
        <FormNumber name={`${at}.supplyV`} label="Supply" unit="V" optional />
      </Pair>
      {sensor.kind === 'linear' ? (
        <Pair>
          <FormNumber name={`${at}.quiescentV`} label="Output without field" unit="V" optional />
          <FormNumber name={`${at}.sensitivityMvPerMt`} label="Sensitivity" unit="mV/mT" optional />
        </Pair>
      ) : (
        <>
          <Pair>
            <FormNumber name={`${at}.operateMt`} label="Operate point" unit="mT" optional />
            <FormNumber name={`${at}.releaseMt`} label="Release point" unit="mT" optional />
          </Pair>
          <Switch
            label="Active low"
            help="The output is pulled low while the sensor is on."
            value={sensor.activeLow}
            onChange={(value) => setValue(`${at}.activeLow`, value, { shouldDirty: true })}
          />
        </>
      )}
    </View>
  );
}
