/** The cookie that holds the refresh token: never seen by a script, never sent by another site. */
import type { IncomingMessage } from 'node:http';
import type { CookieOptions, Response } from 'express';
import type { ServerConfig } from '@/server/config/config';
import { signInLifeMs } from './sessions';

export type RefreshCookie = {
  name: string;
  read(req: IncomingMessage): string | undefined;
  set(res: Response, token: string): void;
  clear(res: Response): void;
};

export function createRefreshCookie(config: Pick<ServerConfig, 'publicUrl'>): RefreshCookie {
  const https = config.publicUrl?.protocol === 'https:';
  const name = https ? '__Host-turnmark' : 'turnmark';
  // The prefix demands Path=/; without it the cookie goes to the session's own address only.
  const options: CookieOptions = {
    httpOnly: true,
    sameSite: 'strict',
    secure: https,
    path: https ? '/' : '/api/v1/session',
  };
  return {
    name,
    read(req) {
      for (const part of (req.headers.cookie ?? '').split(';')) {
        const [key, value] = part.trim().split('=', 2);
        if (key === name && value) return value;
      }
      return undefined;
    },
    set: (res, token) => void res.cookie(name, token, { ...options, maxAge: signInLifeMs }),
    clear: (res) => void res.clearCookie(name, options),
  };
}
