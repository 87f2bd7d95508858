import { z } from 'zod';
import { id, role } from '@/server/contract/common';

export const user = z.object({ id, email: z.string(), name: z.string(), role }).meta({ id: 'User' });
export type User = z.infer<typeof user>;

export const signIn = z
  .object({ email: z.string().trim().min(3).max(254), password: z.string().min(1).max(256) })
  .meta({ id: 'SignIn' });

export const session = z
  .object({ accessToken: z.string(), expiresInS: z.number().int().positive(), user })
  .meta({ id: 'Session' });
export type Session = z.infer<typeof session>;
