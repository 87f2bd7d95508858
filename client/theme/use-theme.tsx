import { createContext, useContext, useEffect, useSyncExternalStore } from 'react';
import type { ReactNode } from 'react';
import { useColorScheme, useWindowDimensions } from 'react-native';
import { changePreferences, onPreferences, readPreferences } from '@/client/theme/preferences';
import type { Preferences } from '@/client/theme/preferences';
import { schemes, size } from '@/client/theme/tokens';
import type { Colours, Scheme } from '@/client/theme/tokens';

type Theme = { scheme: Scheme; colours: Colours };
const ThemeContext = createContext<Theme>({ scheme: 'steel', colours: schemes.steel });

/** Follows the system's scheme unless this browser's preferences fix one. */
export function ThemeProvider({ children }: { children: ReactNode }) {
  const system = useColorScheme();
  const wanted = usePreferences().scheme;
  const scheme: Scheme = wanted === 'system' ? (system === 'dark' ? 'dye' : 'steel') : wanted;
  useEffect(() => {
    document.documentElement.dataset['scheme'] = scheme;
  }, [scheme]);
  return <ThemeContext value={{ scheme, colours: schemes[scheme] }}>{children}</ThemeContext>;
}

/** A part of the page in a scheme of its own (the gallery shows both). */
export function FixedScheme({ scheme, children }: { scheme: Scheme; children: ReactNode }) {
  return <ThemeContext value={{ scheme, colours: schemes[scheme] }}>{children}</ThemeContext>;
}

export function useTheme(): Theme {
  return useContext(ThemeContext);
}

export function useColours(): Colours {
  return useContext(ThemeContext).colours;
}

export function usePreferences(): Preferences {
  return useSyncExternalStore(onPreferences, readPreferences, readPreferences);
}

/** Fixes the scheme, or follows the system again. */
export function setScheme(scheme: Preferences['scheme']): void {
  changePreferences({ scheme });
}

/** Left rail and columns instead of bottom bar and one column. */
export function useWide(): boolean {
  return useWindowDimensions().width >= size.wideFrom;
}
