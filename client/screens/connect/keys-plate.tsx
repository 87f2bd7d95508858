import { useState } from 'react';
import { View } from 'react-native';
import type { RigKey } from '@/server/contract';
import { Button } from '@/client/components/button';
import { Confirm } from '@/client/components/confirm';
import { Icon } from '@/client/components/icon';
import { Plate } from '@/client/components/plate';
import { Loading } from '@/client/components/states';
import { Text } from '@/client/components/text';
import { useToast } from '@/client/components/toast';
import { asProblem } from '@/client/data/api-problem';
import { useRevokeKey, type useKeys } from '@/client/data/keys';
import { useNow } from '@/client/data/use-now';
import { MakeKey } from '@/client/screens/connect/make-key';
import { ProblemState } from '@/client/screens/shared/problem-state';
import { shortInstant } from '@/client/screens/shared/when';
import { space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

type KeysPlateProps = {
  rigId: string;
  keys: ReturnType<typeof useKeys>;
  /** The key just made, as long as it is shown. */
  onKey: (key: string | null) => void;
};

/** The keys of a rig by name; the keys themselves are shown once and never again. */
export function KeysPlate({ rigId, keys, onKey }: KeysPlateProps) {
  const [asked, setAsked] = useState<RigKey | null>(null);
  const revoke = useRevokeKey(rigId);
  const toast = useToast();
  const revokeNow = async (key: RigKey) => {
    try {
      await revoke.mutateAsync(key.id);
      toast({ text: `Key ${key.name} is revoked.` });
    } catch (error) {
      toast({ text: `The key still holds. ${asProblem(error).title}.` });
    }
    setAsked(null);
  };
  return (
    <Plate style={{ gap: space.l }}>
      <Text heading={2} size="lead" weight="medium">
        1. Key
      </Text>
      <Text size="small" tone="scribeSoft">
        A board shows its key with every block. A key may only send samples for this rig.
      </Text>
      {keys.data ? (
        <View role="list" aria-label="Keys of this rig">
          {keys.data.items.map((key) => (
            <KeyRow key={key.id} rigKey={key} onRevoke={() => setAsked(key)} />
          ))}
        </View>
      ) : keys.isError ? (
        <ProblemState error={keys.error} what="the keys" onRetry={() => void keys.refetch()} />
      ) : (
        <Loading label="Reading the keys" />
      )}
      <MakeKey rigId={rigId} first={keys.data?.items.length === 0} onKey={onKey} />
      <Confirm
        open={asked !== null}
        title={`Revoke the key ${asked?.name ?? ''}`}
        message="Boards that use it are cut off at once and cannot send again. What they have sent stays. A revoked key cannot be brought back."
        action="Revoke the key"
        busy={revoke.isPending}
        onConfirm={() => asked && void revokeNow(asked)}
        onClose={() => setAsked(null)}
      />
    </Plate>
  );
}

function KeyRow({ rigKey, onRevoke }: { rigKey: RigKey; onRevoke: () => void }) {
  const colours = useColours();
  const now = useNow(60_000);
  const used = rigKey.lastUsedAt ? `last used ${shortInstant(rigKey.lastUsedAt, now)}` : 'never used';
  return (
    <View
      role="listitem"
      style={{
        flexDirection: 'row',
        alignItems: 'center',
        gap: space.m,
        paddingVertical: space.s,
        borderBottomWidth: 1,
        borderBottomColor: colours.hairline,
      }}
    >
      <Icon name="key" tone="scribeSoft" />
      <View style={{ flex: 1, minWidth: 0 }}>
        <Text weight="medium" lines={2}>
          {rigKey.name}
        </Text>
        <Text size="small" tone="scribeSoft" figures>
          {used} · made {shortInstant(rigKey.createdAt, now)} by {rigKey.createdBy}
        </Text>
      </View>
      <Button label="Revoke" longLabel={`Revoke ${rigKey.name}`} kind="quiet" onPress={onRevoke} />
    </View>
  );
}
