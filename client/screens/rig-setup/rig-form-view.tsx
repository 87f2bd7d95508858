import { useState } from 'react';
import type { ReactNode } from 'react';
import { FormProvider } from 'react-hook-form';
import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { Plate } from '@/client/components/plate';
import { Text } from '@/client/components/text';
import type { Settings } from '@/signal/model';
import { asProblem } from '@/client/data/api-problem';
import { ChannelsPart } from '@/client/screens/rig-setup/channels-part';
import type { RigDraft } from '@/client/screens/rig-setup/draft';
import { RigPart } from '@/client/screens/rig-setup/rig-part';
import { SidePlate } from '@/client/screens/rig-setup/side-plate';
import { SpeedPart } from '@/client/screens/rig-setup/speed-part';
import { StepBar } from '@/client/screens/rig-setup/step-bar';
import { stepOfPath, steps, type StepId } from '@/client/screens/rig-setup/steps';
import { placeErrors, useRigForm, type RigForm } from '@/client/screens/rig-setup/use-rig-form';
import { WheelPart } from '@/client/screens/rig-setup/wheel-part';
import { space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';

type RigFormViewProps = {
  /** In force; they decide when a shaft reads stopped. */
  settings: Settings;
  initial: RigDraft;
  saveLabel: string;
  /** Throws `ApiProblem`. */
  onSave: (draft: RigDraft) => Promise<void>;
};

const parts: Record<StepId, () => ReactNode> = {
  rig: RigPart,
  wheel: WheelPart,
  channels: ChannelsPart,
  speed: SpeedPart,
};

/** The rig's setup: steps on a phone, form and drawing side by side where there is room. */
export function RigFormView({ initial, settings, saveLabel, onSave }: RigFormViewProps) {
  const form = useRigForm(initial);
  const wide = useWide();
  const [step, setStep] = useState(0);
  const [refused, setRefused] = useState<string | null>(null);
  const save = form.handleSubmit(
    async (draft) => {
      setRefused(null);
      try {
        await onSave(draft);
      } catch (error) {
        const problem = asProblem(error);
        const first = placeErrors(form, problem);
        if (first !== null) setStep(stepOfPath(first));
        setRefused(`Not saved. ${[problem.title, problem.detail].filter(Boolean).join('. ')}`);
      }
    },
    () => setStep(firstStepAtFault(form)),
  );
  const next = async () => {
    if (await form.trigger(steps[step]?.fields)) setStep(step + 1);
  };
  const last = step === steps.length - 1;
  const failed = refused ? (
    <Text role="alert" tone="fault">
      {refused}
    </Text>
  ) : null;
  const saveButton = (
    <Button label={saveLabel} kind="filled" busy={form.formState.isSubmitting} onPress={save} />
  );
  if (wide) {
    return (
      <FormProvider {...form}>
        <View style={{ flexDirection: 'row', gap: space.xl, alignItems: 'flex-start' }}>
          <View style={{ flex: 3, minWidth: 0, gap: space.l }}>
            {steps.map(({ id, title }) => (
              <Part key={id} id={id} title={title} />
            ))}
            {failed}
            <View style={{ alignSelf: 'flex-start' }}>{saveButton}</View>
          </View>
          <View style={{ flex: 2, minWidth: 0, position: 'sticky' as never, top: space.l }}>
            <SidePlate settings={settings} />
          </View>
        </View>
      </FormProvider>
    );
  }
  const { id, title } = steps[step] ?? steps[0]!;
  return (
    <FormProvider {...form}>
      <StepBar current={step} free={initial.name !== ''} onChoose={setStep} />
      <Part id={id} title={title} />
      {id === 'wheel' || id === 'speed' ? <SidePlate settings={settings} /> : null}
      {failed}
      <View style={{ flexDirection: 'row', gap: space.m }}>
        {step > 0 ? <Button label="Back" onPress={() => setStep(step - 1)} style={{ flex: 1 }} /> : null}
        <View style={{ flex: 2 }}>
          {last ? saveButton : <Button label="Next" kind="filled" onPress={() => void next()} />}
        </View>
      </View>
    </FormProvider>
  );
}

function Part({ id, title }: { id: StepId; title: string }) {
  const Fields = parts[id];
  // Channels bring plates of their own.
  if (id === 'channels') {
    return (
      <View style={{ gap: space.m }}>
        <Text heading={2} size="lead" weight="medium">
          {title}
        </Text>
        <Fields />
      </View>
    );
  }
  return (
    <Plate style={{ gap: space.l }}>
      <Text heading={2} size="lead" weight="medium">
        {title}
      </Text>
      <Fields />
    </Plate>
  );
}

function firstStepAtFault(form: RigForm): number {
  const { errors } = form.formState;
  const at = steps.findIndex((s) => s.fields.some((field) => field in errors));
  return Math.max(0, at);
}
