import { useEffect, type ReactNode } from 'react';
import { QueryClientProvider } from '@tanstack/react-query';
import { AppDataContext } from '@/client/data/app-data-context';
import { systemClock } from '@/client/data/clock';
import { createAppData } from '@/client/data/create-app-data';
import { liveUrl, type RawSocket } from '@/client/data/socket';

const appData = createAppData({
  fetch: (url, init) => fetch(url, init),
  clock: systemClock,
  openSocket: () => new WebSocket(liveUrl(window.location.origin)) as unknown as RawSocket,
  random: Math.random,
  schedule: (run) => requestAnimationFrame(run),
});

/** Gives the screens their data, restores the session at start, and rests while nobody sees the page. */
export function DataProvider({ children }: { children: ReactNode }) {
  useEffect(() => {
    void appData.session.restore();
    const look = () => appData.live.setHidden(document.visibilityState === 'hidden');
    look();
    document.addEventListener('visibilitychange', look);
    return () => document.removeEventListener('visibilitychange', look);
  }, []);
  return (
    <AppDataContext.Provider value={appData}>
      <QueryClientProvider client={appData.queries}>{children}</QueryClientProvider>
    </AppDataContext.Provider>
  );
}
