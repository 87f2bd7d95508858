import { useLocalSearchParams } from 'expo-router';
import { ReplayScreen } from '@/client/screens/replay/replay-screen';

export default function ReplayRoute() {
  const { captureId } = useLocalSearchParams<{ captureId: string }>();
  return <ReplayScreen key={captureId} captureId={captureId} />;
}
