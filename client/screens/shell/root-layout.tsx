import '@/client/data/zod-without-eval';
import { SpaceGrotesk_400Regular } from '@expo-google-fonts/space-grotesk/400Regular';
import { SpaceGrotesk_500Medium } from '@expo-google-fonts/space-grotesk/500Medium';
import { SpaceGrotesk_700Bold } from '@expo-google-fonts/space-grotesk/700Bold';
import { SpaceMono_400Regular } from '@expo-google-fonts/space-mono/400Regular';
import { SpaceMono_700Bold } from '@expo-google-fonts/space-mono/700Bold';
import { useFonts } from 'expo-font';
import { Slot } from 'expo-router';
import { SafeAreaProvider } from 'react-native-safe-area-context';
import { ToastProvider } from '@/client/components/toast';
import { DataProvider } from '@/client/data/data-provider';
import { SessionReady } from '@/client/screens/sign-in/session-ready';
import { ThemeProvider } from '@/client/theme/use-theme';

const faces = {
  SpaceGrotesk_400Regular,
  SpaceGrotesk_500Medium,
  SpaceGrotesk_700Bold,
  SpaceMono_400Regular,
  SpaceMono_700Bold,
};

/** Providers and the navigator's slot. Nothing is drawn before the faces are there, so that no line jumps. */
export function RootLayout() {
  const [loaded, failed] = useFonts(faces);
  if (!loaded && !failed) return null;
  return (
    <SafeAreaProvider>
      <ThemeProvider>
        <ToastProvider>
          <DataProvider>
            <SessionReady>
              <Slot />
            </SessionReady>
          </DataProvider>
        </ToastProvider>
      </ThemeProvider>
    </SafeAreaProvider>
  );
}
