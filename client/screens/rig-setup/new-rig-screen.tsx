import { defaultSettings } from '@/signal/model';
import { Screen } from '@/client/components/screen';
import { NoPermission } from '@/client/components/states';
import { useMay } from '@/client/data/app-data-context';
import { useCreateRig } from '@/client/data/rigs';
import { emptyDraft } from '@/client/screens/rig-setup/draft';
import { RigFormView } from '@/client/screens/rig-setup/rig-form-view';
import { inputOf } from '@/client/screens/rig-setup/use-rig-form';
import { rigPath, useGo } from '@/client/screens/shared/use-go';

/** A new rig; saved, it goes on to Connect. */
export function NewRigScreen() {
  const go = useGo();
  const may = useMay('engineer');
  const create = useCreateRig();
  return (
    <Screen title="New rig" back={{ href: '/rigs', label: 'Back to the rigs' }} width={1180}>
      {may ? (
        <RigFormView
          initial={emptyDraft}
          settings={defaultSettings}
          saveLabel="Make the rig"
          onSave={async (draft) => {
            const made = await create.mutateAsync(inputOf(draft));
            go(rigPath.connect(made.id));
          }}
        />
      ) : (
        <NoPermission message="Rigs are set up by engineers. Ask one, or an admin for the role." />
      )}
    </Screen>
  );
}
