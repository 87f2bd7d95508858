import { useState } from 'react';
import type { ReactNode } from 'react';
import { Redirect, useGlobalSearchParams, usePathname } from 'expo-router';
import type { Href } from 'expo-router';
import { useSession } from '@/client/data/app-data-context';
import { safeReturn } from '@/client/screens/sign-in/safe-return';

/** Lets signed-in people in, and sends the others to sign in and back. What may be seen the hub decides. */
export function SessionGate({ children }: { children: ReactNode }) {
  const session = useSession();
  const here = useHere();
  if (session.status === 'signed-in') return children;
  return <ToSignIn to={session.status === 'signed-out' && session.why === 'asked' ? null : here} />;
}

/** Keeps the place as it was at first: on the way to the sign-in the address is already another. */
function ToSignIn({ to }: { to: string | null }) {
  const [href] = useState(() => `/sign-in${to === null ? '' : `?to=${encodeURIComponent(to)}`}`);
  return <Redirect href={href as Href} />;
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
