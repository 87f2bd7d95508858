/** The hub as a value: created, used, closed. The process and the tests call the same. */
import { createServer as createHttpServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { createApp } from './app';
import type { ServerConfig } from './config/config';
import { createContext } from './context';
import type { AppContext, Overrides } from './context';
import { prepareDemoPeople } from './demo/demo-people';
import { startDemoLab } from './demo/demo-lab';
import { apiRoutes } from './routes';
import { acceptUpgrades } from './upgrade';

export type TurnmarkServer = {
  /** On this machine. */
  url: string;
  port: number;
  context: AppContext;
  close(): Promise<void>;
};

/** Throws `ConfigError`, `DbOpenError`, or what listening throws; whatever was opened is closed again. */
export async function createServer(config: ServerConfig, overrides: Overrides = {}): Promise<TurnmarkServer> {
  const context = await createContext(config, overrides);
  const { disposers, log } = context;
  try {
    if (config.mode === 'demo') await prepareDemoPeople(context);
    const http = createHttpServer(createApp(context, apiRoutes(context), overrides.webDir));
    // A 64 MiB recording over a slow radio takes its minutes; a board's idle connection does not.
    http.requestTimeout = 10 * 60_000;
    const { origin, verifyRigKey, boards, viewers } = context;
    const endSockets = acceptUpgrades(http, {
      origin,
      verifyRigKey,
      attachBoard: (socket, key) => boards.attach(socket, key),
      attachViewer: (socket) => viewers.attach(socket),
    });
    await new Promise<void>((resolve, reject) => {
      http.once('error', reject);
      http.listen(config.port, () => resolve());
    });
    http.on('error', (err) => log.error({ err }, 'web server'));
    const { port } = http.address() as AddressInfo;
    const url = `http://localhost:${port}`;

    disposers.add('web server', () => {
      const closed = new Promise<void>((resolve) => http.close(() => resolve()));
      boards.stop();
      viewers.close();
      http.closeIdleConnections();
      // Closing frames get a moment to leave; what still hangs is hung up.
      setTimeout(() => {
        endSockets();
        http.closeAllConnections();
      }, 300);
      return closed;
    });
    if (config.mode === 'demo' && config.demoRigs) {
      const lab = await startDemoLab(context, url);
      disposers.add('demo rigs', () => lab.stop());
    }
    log.info({ port, mode: config.mode }, 'hub is up');
    return { url, port, context, close: () => disposers.dispose() };
  } catch (error) {
    await disposers.dispose();
    throw error;
  }
}
