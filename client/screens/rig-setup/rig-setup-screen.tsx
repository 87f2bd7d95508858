import { defaultSettings } from '@/signal/model';
import { Screen } from '@/client/components/screen';
import { NoPermission, Skeleton } from '@/client/components/states';
import { useToast } from '@/client/components/toast';
import { useMay } from '@/client/data/app-data-context';
import { useRig, useSaveRig } from '@/client/data/rigs';
import { useSettings } from '@/client/data/settings';
import { draftOfRig } from '@/client/screens/rig-setup/draft';
import { RigFormView } from '@/client/screens/rig-setup/rig-form-view';
import { inputOf } from '@/client/screens/rig-setup/use-rig-form';
import { ProblemState } from '@/client/screens/shared/problem-state';
import { RigTabs } from '@/client/screens/shared/rig-tabs';
import { rigPath, useGo } from '@/client/screens/shared/use-go';

/** The setup of a rig that exists. What is saved counts from the next block on. */
export function RigSetupScreen({ rigId }: { rigId: string }) {
  const rig = useRig(rigId);
  const settings = useSettings(rigId);
  const save = useSaveRig(rigId);
  const may = useMay('engineer');
  const toast = useToast();
  const go = useGo();
  return (
    <Screen
      title={rig.data ? rig.data.name : 'Setup'}
      subtitle={rig.data ? 'Setup' : undefined}
      back={{ href: rigPath.watch(rigId) as never, label: 'Back to Watch' }}
      below={<RigTabs rigId={rigId} current="setup" />}
      width={1180}
    >
      {!may ? (
        <NoPermission message="The setup of a rig is changed by engineers. You can watch the rig and open its captures." />
      ) : rig.data ? (
        <RigFormView
          key={rigId}
          initial={draftOfRig(rig.data)}
          settings={settings.data?.items[0] ?? defaultSettings}
          saveLabel="Save the setup"
          onSave={async (draft) => {
            await save.mutateAsync(inputOf(draft));
            toast({ text: 'Setup saved. It counts from the next block on.' });
            go(rigPath.watch(rigId));
          }}
        />
      ) : rig.isError ? (
        <ProblemState error={rig.error} what="this rig" onRetry={() => void rig.refetch()} />
      ) : (
        <Skeleton rows={3} height={160} />
      )}
    </Screen>
  );
}
