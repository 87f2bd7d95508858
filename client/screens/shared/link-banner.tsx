import { OfflineBanner } from '@/client/components/states';
import { useConnection } from '@/client/data/use-live';

/** Says that live values have stopped, and tries again on a press. Nothing while all is well. */
export function LinkBanner() {
  const connection = useConnection();
  if (connection.status === 'waiting') {
    return (
      <OfflineBanner
        message="No link to the hub. Live values have stopped; what is stored is safe. Trying again by itself."
        onRetry={connection.retry}
      />
    );
  }
  if (connection.status === 'failed' && connection.why === 'forbidden') {
    return (
      <OfflineBanner message="The hub does not give live values to your role." onRetry={connection.retry} />
    );
  }
  return null;
}
