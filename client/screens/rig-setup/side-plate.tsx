import { useFormContext } from 'react-hook-form';
import { View } from 'react-native';
import { Facts } from '@/client/components/facts';
import { Plate } from '@/client/components/plate';
import { StatusWord } from '@/client/components/status-word';
import { Text } from '@/client/components/text';
import type { Settings } from '@/signal/model';
import { consequenceRows, sensorSentences, wheelOf } from '@/client/screens/rig-setup/consequence-rows';
import { numberOf, type RigDraft } from '@/client/screens/rig-setup/draft';
import { WheelDrawing } from '@/client/screens/rig-setup/wheel-drawing';
import { space } from '@/client/theme/tokens';

/** The wheel as typed and what follows from it, while one types. */
export function SidePlate({ settings }: { settings: Pick<Settings, 'holdoffS' | 'speed'> }) {
  const { watch } = useFormContext<RigDraft>();
  const [sensing, typed, ratedRpm, rate, channels] = watch([
    'sensing',
    'wheel',
    'ratedRpm',
    'sampleRateHz',
    'channels',
  ]);
  const notes = sensorSentences(channels);
  const wheel = wheelOf({ sensing, wheel: typed, ratedRpm });
  const found = wheel ? consequenceRows(wheel, numberOf(rate), settings) : null;
  return (
    <Plate style={{ gap: space.l }}>
      <Text heading={2} size="lead" weight="medium">
        What follows
      </Text>
      {wheel && found ? (
        <>
          <View style={{ alignItems: 'center' }}>
            <WheelDrawing
              pulsesPerTurn={wheel.wheel.pulsesPerTurn}
              missingPulses={wheel.wheel.missingPulses}
              size={200}
            />
          </View>
          <Facts facts={found.facts} />
          {found.warning ? <StatusWord status="warn" word={found.warning} /> : null}
        </>
      ) : (
        <Text size="small" tone="scribeSoft">
          Enter the wheel: then its drawing stands here, with the tooth frequency and the speeds that can be
          followed.
        </Text>
      )}
      {notes.map((note) => (
        <Text key={note} size="small" tone="scribeSoft">
          {note}
        </Text>
      ))}
    </Plate>
  );
}
