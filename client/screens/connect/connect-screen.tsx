import { useState } from 'react';
import { View } from 'react-native';
import type { Rig } from '@/server/contract';
import { Screen } from '@/client/components/screen';
import { NoPermission, Skeleton } from '@/client/components/states';
import { useMay } from '@/client/data/app-data-context';
import { useKeys } from '@/client/data/keys';
import { useRig } from '@/client/data/rigs';
import { useLiveRig } from '@/client/data/use-live';
import { checklist, mergeChecks, type Check } from '@/client/screens/connect/checklist';
import { ChecklistPlate } from '@/client/screens/connect/checklist-plate';
import { KeysPlate } from '@/client/screens/connect/keys-plate';
import { LinesPlate } from '@/client/screens/connect/lines-plate';
import { LinkBanner } from '@/client/screens/shared/link-banner';
import { ProblemState } from '@/client/screens/shared/problem-state';
import { RigTabs } from '@/client/screens/shared/rig-tabs';
import { rigPath } from '@/client/screens/shared/use-go';
import { space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';

/** From a key to a speed: keys, lines to paste, and what has arrived. */
export function ConnectScreen({ rigId }: { rigId: string }) {
  const rig = useRig(rigId);
  const may = useMay('engineer');
  return (
    <Screen
      title={rig.data ? rig.data.name : 'Connect'}
      subtitle={rig.data ? 'Connect' : undefined}
      back={{ href: rigPath.watch(rigId) as never, label: 'Back to Watch' }}
      below={<RigTabs rigId={rigId} current="connect" />}
      banner={<LinkBanner />}
      width={1180}
    >
      {!may ? (
        <NoPermission message="Keys are made by engineers: who holds one can send samples in the name of the rig." />
      ) : rig.data ? (
        <Connect rig={rig.data} />
      ) : rig.isError ? (
        <ProblemState error={rig.error} what="this rig" onRetry={() => void rig.refetch()} />
      ) : (
        <Skeleton rows={3} height={160} />
      )}
    </Screen>
  );
}

const askEveryMs = 2_000;

function Connect({ rig }: { rig: Rig }) {
  const wide = useWide();
  const [rigKey, setRigKey] = useState<string | null>(null);
  const live = useLiveRig(rig.id, { ribbon: null, detail: true });
  const [kept, setKept] = useState<Check[]>([]);
  const keyDone = kept.some((c) => c.id === 'key' && c.state === 'done');
  const keys = useKeys(rig.id, keyDone ? null : askEveryMs);
  const checks = mergeChecks(kept, checklist(rig, keys.data?.items ?? [], live));
  // Kept during the render, as React advises for state that follows from what comes in.
  if (JSON.stringify(checks) !== JSON.stringify(kept)) setKept(checks);
  const left = (
    <>
      <KeysPlate rigId={rig.id} keys={keys} onKey={setRigKey} />
      <LinesPlate rig={rig} rigKey={rigKey} />
    </>
  );
  const list = <ChecklistPlate rigId={rig.id} checks={checks} />;
  if (!wide) {
    return (
      <>
        {left}
        {list}
      </>
    );
  }
  return (
    <View style={{ flexDirection: 'row', gap: space.l, alignItems: 'flex-start' }}>
      <View style={{ flex: 3, minWidth: 0, gap: space.l }}>{left}</View>
      <View style={{ flex: 2, minWidth: 0, position: 'sticky' as never, top: space.l }}>{list}</View>
    </View>
  );
}
