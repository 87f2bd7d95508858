import { Slot } from 'expo-router';
import { AppShell } from '@/client/components/app-shell';
import { SessionGate } from '@/client/screens/sign-in/session-gate';

/** Everything behind sign-in: nobody gets further without a session; after sign-in the page asked for comes back. */
export function ShellLayout() {
  return (
    <SessionGate>
      <AppShell>
        <Slot />
      </AppShell>
    </SessionGate>
  );
}
