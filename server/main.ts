/** The process: starts the hub, says where it is, and ends it when told to. */
import { configFrom } from './config/config';
import { readEnv } from './config/env';
import { createServer } from './create-server';
import { greeting } from './greeting';
import { startFailure } from './start-failure';

try {
  const server = await createServer(configFrom(readEnv()));
  const stop = () => {
    // What hangs must not keep the process: the spool holds everything that was acked.
    setTimeout(() => process.exit(1), 10_000).unref();
    void server.close().then(() => process.exit(0));
  };
  process.once('SIGINT', stop);
  process.once('SIGTERM', stop);
  console.log(greeting(server));
} catch (error) {
  console.error(startFailure(error) ?? error);
  process.exit(1);
}
