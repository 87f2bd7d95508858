import { createContext, useContext, useSyncExternalStore } from 'react';
import type { QueryClient } from '@tanstack/react-query';
import { roleAtLeast, type Role, type User } from '@/server/contract';
import type { Api } from '@/client/data/api';
import type { LiveStore } from '@/client/data/live-store';
import type { SessionState, SessionStore } from '@/client/data/session';

export type AppData = { api: Api; session: SessionStore; live: LiveStore; queries: QueryClient };

export const AppDataContext = createContext<AppData | null>(null);

export function useAppData(): AppData {
  const data = useContext(AppDataContext);
  if (!data) throw new Error('useAppData outside of DataProvider');
  return data;
}

export function useApi(): Api {
  return useAppData().api;
}

export function useSession(): SessionState {
  const { session } = useAppData();
  return useSyncExternalStore(session.subscribe, session.getSnapshot);
}

/** Who is signed in; null where nobody is. */
export function useUser(): User | null {
  const session = useSession();
  return session.status === 'signed-in' ? session.user : null;
}

/** May the one signed in do what needs this role? The hub checks it again. */
export function useMay(wanted: Role): boolean {
  const user = useUser();
  return user !== null && roleAtLeast(user.role, wanted);
}
