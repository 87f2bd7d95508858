/** One hub with its demo rigs for all journeys. */
import { startHub } from '@/tests/e2e/start-hub';

export default async function globalSetup(): Promise<() => Promise<void>> {
  const hub = await startHub();
  process.env.TURNMARK_E2E_URL = hub.url;
  process.env.TURNMARK_E2E_PASSWORD = hub.password;
  return () => hub.remove();
}
