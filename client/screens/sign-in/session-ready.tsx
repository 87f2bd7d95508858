import { useState } from 'react';
import type { ReactNode } from 'react';
import { View } from 'react-native';
import { ErrorState, Loading } from '@/client/components/states';
import { useAppData, useSession } from '@/client/data/app-data-context';
import { space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

/** Pages that need no session, and so need not wait for one. */
const openPages = ['/sign-in', '/gallery'];

/**
 * Draws no page before it is known whether somebody is signed in. It stands above the navigator: one that is there
 * without its pages forgets the address that was asked for.
 */
export function SessionReady({ children }: { children: ReactNode }) {
  const session = useSession();
  const { session: store } = useAppData();
  const [open] = useState(() => openPages.includes(window.location.pathname));
  if (open || session.status === 'signed-in' || session.status === 'signed-out') return children;
  return (
    <Page>
      {session.status === 'restoring' ? (
        <Loading label="Opening the hub" />
      ) : (
        <ErrorState
          title={session.problem.title}
          message={`${session.problem.detail} Nothing is lost: rigs are recorded by the hub, not by this page.`}
          onRetry={() => void store.restore()}
        />
      )}
    </Page>
  );
}

function Page({ children }: { children: ReactNode }) {
  const colours = useColours();
  return (
    <View
      role="main"
      style={{
        flex: 1,
        justifyContent: 'center',
        paddingHorizontal: space.l,
        backgroundColor: colours.ground,
      }}
    >
      {children}
    </View>
  );
}
