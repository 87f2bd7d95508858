import { Redirect, Slot, usePathname } from 'expo-router';
import type { Href } from 'expo-router';
import { AppShell } from '@/client/components/app-shell';
import { ErrorState, Loading } from '@/client/components/states';
import { useAppData, useSession } from '@/client/data/app-data-context';

/** Everything behind sign-in: nobody gets further without a session; after sign-in the page asked for comes back. */
export function ShellLayout() {
  const state = useSession();
  const { session } = useAppData();
  const path = usePathname();
  if (state.status === 'restoring') return <Loading label="Looking for your session" />;
  if (state.status === 'unreachable') {
    return (
      <ErrorState
        title="The hub does not answer"
        message="Nothing is lost: rigs are recorded by the hub, not by this page. Check the network, then try again."
        onRetry={() => void session.restore()}
      />
    );
  }
  if (state.status === 'signed-out') {
    const params = state.why === 'asked' || path === '/' ? {} : { next: path };
    return <Redirect href={{ pathname: '/sign-in', params } as unknown as Href} />;
  }
  return (
    <AppShell>
      <Slot />
    </AppShell>
  );
}
