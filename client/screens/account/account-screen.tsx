import { useState } from 'react';
import { View } from 'react-native';
import type { Role } from '@/server/contract';
import { Button } from '@/client/components/button';
import { Confirm } from '@/client/components/confirm';
import { Facts } from '@/client/components/facts';
import { Plate } from '@/client/components/plate';
import { SchemeChoice } from '@/client/components/scheme-switch';
import { Screen } from '@/client/components/screen';
import { Text } from '@/client/components/text';
import { asProblem } from '@/client/data/api-problem';
import { useAppData, useUser } from '@/client/data/app-data-context';
import { space } from '@/client/theme/tokens';

const mayDo: Record<Role, string> = {
  reviewer: 'You can watch rigs and open captures. Rigs and settings are changed by engineers.',
  engineer: 'You can set up rigs, make keys, keep captures and change settings.',
  admin: 'You can do all that an engineer can, and delete rigs and any capture.',
};

/** Who am I, how does it look, and out again. */
export function AccountScreen() {
  const user = useUser();
  if (!user) return null;
  return (
    <Screen title="Account" back={{ href: '/more', label: 'Back to More' }}>
      <Plate style={{ gap: space.m }}>
        <Text heading={2} size="lead" weight="medium">
          {user.name}
        </Text>
        <Facts
          facts={[
            { name: 'Email', value: user.email },
            { name: 'Role', value: user.role },
          ]}
        />
        <Text size="small" tone="scribeSoft">
          {mayDo[user.role]}
        </Text>
      </Plate>
      <Plate>
        <SchemeChoice />
      </Plate>
      <SignOut />
    </Screen>
  );
}

function SignOut() {
  const { session } = useAppData();
  const [busy, setBusy] = useState(false);
  const [asking, setAsking] = useState(false);
  const [failed, setFailed] = useState<string | null>(null);
  const end = async (how: () => Promise<void>) => {
    setBusy(true);
    setFailed(null);
    try {
      await how();
    } catch (error) {
      setFailed(`You are still signed in. ${asProblem(error).title}.`);
      setBusy(false);
      setAsking(false);
    }
  };
  return (
    <Plate style={{ gap: space.m }}>
      <View style={{ flexDirection: 'row', flexWrap: 'wrap', gap: space.m }}>
        <Button label="Sign out" busy={busy} onPress={() => void end(() => session.signOut())} />
        <Button
          label="Sign out everywhere"
          kind="destructive"
          disabled={busy}
          onPress={() => setAsking(true)}
        />
      </View>
      {failed ? (
        <Text role="alert" tone="fault">
          {failed}
        </Text>
      ) : null}
      <Confirm
        open={asking}
        title="Sign out everywhere"
        message="Every phone and browser where you are signed in is signed out at once, this one too. Boards go on streaming: their keys are not touched."
        action="Sign out everywhere"
        busy={busy}
        onConfirm={() => void end(() => session.signOutEverywhere())}
        onClose={() => setAsking(false)}
      />
    </Plate>
  );
}
