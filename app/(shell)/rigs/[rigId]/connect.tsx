import { useLocalSearchParams } from 'expo-router';
import { lazyPage } from '@/client/screens/shell/lazy-page';

const ConnectScreen = lazyPage(
  async () => (await import('@/client/screens/connect/connect-screen')).ConnectScreen,
);

export default function ConnectRoute() {
  const { rigId } = useLocalSearchParams<{ rigId: string }>();
  return <ConnectScreen key={rigId} rigId={rigId} />;
}
