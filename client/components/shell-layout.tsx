import { Slot } from 'expo-router';
import { AppShell } from '@/client/components/app-shell';

/** Everything behind sign-in stands in the shell. */
export function ShellLayout() {
  return (
    <AppShell>
      <Slot />
    </AppShell>
  );
}
