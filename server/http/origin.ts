/** Whose page is calling. A browser says so in `Origin`; scripts and boards send none. */
import type { IncomingMessage } from 'node:http';
import type { ServerConfig } from '@/server/config/config';

export type OriginCheck = {
  /** true: the hub's own page. false: another page's. undefined: no `Origin` at all. */
  isOwn(req: IncomingMessage): boolean | undefined;
};

/** With a public URL its origin alone counts; without one (the demo) the address that the page was called by. */
export function createOriginCheck(config: Pick<ServerConfig, 'publicUrl'>): OriginCheck {
  return {
    isOwn(req) {
      const { origin, host } = req.headers;
      if (origin === undefined) return undefined;
      if (config.publicUrl !== undefined) return origin === config.publicUrl.origin;
      if (host === undefined || !URL.canParse(origin)) return false;
      const page = new URL(origin);
      return /^https?:$/.test(page.protocol) && page.host.toLowerCase() === host.toLowerCase();
    },
  };
}
