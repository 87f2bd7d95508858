import { useLocalSearchParams } from 'expo-router';
import { lazyPage } from '@/client/screens/shell/lazy-page';

const ReplayScreen = lazyPage(async () => (await import('@/client/screens/replay/pages')).ReplayScreen);

export default function ReplayRoute() {
  const { captureId } = useLocalSearchParams<{ captureId: string }>();
  return <ReplayScreen key={captureId} captureId={captureId} />;
}
