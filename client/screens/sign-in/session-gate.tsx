import type { ReactNode } from 'react';
import { Redirect, useGlobalSearchParams, usePathname } from 'expo-router';
import type { Href } from 'expo-router';
import { View } from 'react-native';
import { ErrorState, Loading } from '@/client/components/states';
import { useAppData, useSession } from '@/client/data/app-data-context';
import { safeReturn } from '@/client/screens/sign-in/safe-return';
import { useColours } from '@/client/theme/use-theme';

/** Lets signed-in people in, and sends the others to sign in and back. What may be seen the hub decides. */
export function SessionGate({ children }: { children: ReactNode }) {
  const session = useSession();
  const { session: store } = useAppData();
  const to = useHere();
  if (session.status === 'signed-in') return children;
  if (session.status === 'signed-out') {
    const query = session.why === 'asked' ? '' : `?to=${encodeURIComponent(to)}`;
    return <Redirect href={`/sign-in${query}` as Href} />;
  }
  return (
    <Page>
      {session.status === 'restoring' ? (
        <Loading label="Opening the hub" />
      ) : (
        <ErrorState
          title={session.problem.title}
          message={session.problem.detail}
          onRetry={() => void store.restore()}
        />
      )}
    </Page>
  );
}

function Page({ children }: { children: ReactNode }) {
  const colours = useColours();
  return (
    <View role="main" style={{ flex: 1, justifyContent: 'center', backgroundColor: colours.ground }}>
      {children}
    </View>
  );
}

function useHere(): string {
  const path = usePathname();
  const params = useGlobalSearchParams();
  const query = new URLSearchParams();
  for (const [name, value] of Object.entries(params)) {
    // Parts of the path come as parameters too.
    if (typeof value === 'string' && !path.split('/').includes(encodeURIComponent(value)))
      query.set(name, value);
  }
  return safeReturn(query.size > 0 ? `${path}?${query}` : path);
}
