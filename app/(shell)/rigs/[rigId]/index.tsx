import { useLocalSearchParams } from 'expo-router';
import { WatchScreen } from '@/client/screens/watch/watch-screen';

export default function WatchRoute() {
  const { rigId } = useLocalSearchParams<{ rigId: string }>();
  return <WatchScreen key={rigId} rigId={rigId} />;
}
