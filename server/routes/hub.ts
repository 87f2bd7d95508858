/** The hub itself, as boards and people reach it. */
import { lanUrls } from '@/server/addresses';
import type { ServerConfig } from '@/server/config/config';
import { hubInfo } from '@/server/contract';
import type { Route } from '@/server/http/route';
import { route } from '@/server/http/route';

export function hubRoutes({ config }: { config: Pick<ServerConfig, 'mode' | 'publicUrl'> }): Route[] {
  return [
    route({
      method: 'get',
      path: '/hub',
      access: 'reviewer',
      tag: 'Hub',
      summary: 'How boards reach the hub',
      answers: [{ status: 200, description: 'Mode and addresses', schema: hubInfo }],
      problems: [],
      handle({ req }) {
        const { mode, publicUrl } = config;
        const addresses = publicUrl === undefined ? lanUrls(req.socket.localPort ?? 0) : [publicUrl.origin];
        return { status: 200, body: { mode, addresses } };
      },
    }),
  ];
}
