/** The audit trail: what was done or refused, by whom. One helper an event; none of them ever fails a request. */
import { writeAudit } from '@/db';
import type { Actor, TurnmarkDb } from '@/db';
import type { Clock } from '@/server/clock';
import type { Logger } from '@/server/logger';

export type Audit = ReturnType<typeof createAudit>;
type Detail = Record<string, string | number | undefined>;

/** Who is not signed in. */
const nobody: Actor = { id: null, name: '' };
/** What the hub does by itself. */
export const hubItself: Actor = { id: null, name: 'hub' };

export function actorOf({ id, name }: { id: string; name: string }): Actor {
  return { id, name };
}

export function createAudit({ db, clock, log }: { db: TurnmarkDb; clock: Clock; log: Logger }) {
  async function record(by: Actor, action: string, subject: string, detail: Detail = {}): Promise<void> {
    try {
      await writeAudit(db, { by, action, subject, detail, nowMs: clock.nowMs() });
    } catch (error) {
      log.error({ err: error, action }, 'audit row could not be written');
    }
  }

  return {
    signedIn: (by: Actor, address?: string) => record(by, 'session.started', by.id ?? '', { address }),
    /** The e-mail as it was typed. */
    signInRefused: (email: string, address?: string) =>
      record(nobody, 'session.refused', email.slice(0, 254), { address }),
    refreshReused: (personId: string, address?: string) =>
      record(nobody, 'session.token-reused', personId, { address }),
    signedOut: (by: Actor, address?: string) => record(by, 'session.ended', by.id ?? '', { address }),
    signedOutEverywhere: (by: Actor, address?: string) =>
      record(by, 'session.all-ended', by.id ?? '', { address }),
    forbidden: (by: Actor, method: string, path: string, address?: string) =>
      record(by, 'access.forbidden', path.slice(0, 200), { method, address }),
    keyRefused: (rigId: string, keyId: string, address?: string) =>
      record(nobody, 'rig-key.refused', rigId, { keyId, address }),
    rigAdded: (by: Actor, rigId: string, name: string) => record(by, 'rig.added', rigId, { name }),
    rigChanged: (by: Actor, rigId: string, members: string[]) =>
      record(by, 'rig.changed', rigId, { members: members.join(' ') }),
    rigDeleted: (by: Actor, rigId: string, name: string) => record(by, 'rig.deleted', rigId, { name }),
    keyAdded: (by: Actor, rigId: string, keyId: string, name: string) =>
      record(by, 'rig-key.added', rigId, { keyId, name }),
    keyRevoked: (by: Actor, rigId: string, keyId: string) => record(by, 'rig-key.revoked', rigId, { keyId }),
    settingsSaved: (by: Actor, rigId: string, version: number) =>
      record(by, 'settings.saved', rigId, { version }),
    captureKept: (by: Actor, captureId: string, rigId: string) =>
      record(by, 'capture.kept', captureId, { rigId }),
    captureChanged: (by: Actor, captureId: string, members: string[]) =>
      record(by, 'capture.changed', captureId, { members: members.join(' ') }),
    captureDeleted: (by: Actor, captureId: string, title: string) =>
      record(by, 'capture.deleted', captureId, { title }),
    captureExported: (by: Actor, captureId: string, format: string) =>
      record(by, 'capture.exported', captureId, { format }),
  };
}
