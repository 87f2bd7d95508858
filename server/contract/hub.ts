import { z } from 'zod';

/** `GET /hub`: the hub itself, as boards and people reach it. */
export const hubInfo = z
  .object({
    mode: z.enum(['demo', 'production']),
    addresses: z.array(z.string()).meta({
      description: 'Base URLs that a board on the network can reach, the best first; never localhost',
    }),
  })
  .meta({ id: 'Hub' });
