/** Keep: the stretch of the spool that was asked for becomes a capture, under the rig and settings of now. */
import type { Actor, CaptureRecord, CaptureStore, RigRecord, Spool, TurnmarkDb } from '@/db';
import type { Clock } from '@/server/clock';
import type { captureInput } from '@/server/contract';
import type { Hub, KeepPlan } from '@/server/hub/hub-types';
import { settingsInForce } from '@/server/rigs';
import type { z } from 'zod';

export type KeepDeps = { db: TurnmarkDb; spool: Spool; store: CaptureStore; hub: Hub; clock: Clock };

function titleFor(rig: RigRecord, plan: KeepPlan): string {
  const seconds = (plan.toIndex - plan.fromIndex) / plan.rateHz;
  return `${rig.name}, ${Number(seconds.toPrecision(3))} s`;
}

/** null: nothing of it is stored. Throws `StorageUnavailableError` where the disk is full or failing. */
export async function keepStretch(
  { db, spool, store, hub, clock }: KeepDeps,
  rig: RigRecord,
  wish: z.output<typeof captureInput>,
  by: Actor,
): Promise<CaptureRecord | null> {
  const plan = await hub.planKeep(rig.id, wish);
  if (plan === null) return null;
  const release = hub.hold(plan);
  try {
    const { streamId, fromIndex, toIndex } = plan;
    return await store.keep({
      meta: {
        rigId: rig.id,
        title: wish.title || titleFor(rig, plan),
        tags: wish.tags,
        note: wish.note,
        stream: plan.stream,
        startedAtMs: plan.startedAtMs,
        rateHz: plan.rateHz,
        channels: rig.channels.map(({ name }) => name).filter((name) => plan.channels.includes(name)),
        by,
        nowMs: clock.nowMs(),
        settings: await settingsInForce(db, rig),
        rig,
        findings: [],
      },
      source: spool.readSegments(streamId, fromIndex, toIndex),
      gaps: spool.readGaps(streamId, fromIndex, toIndex),
      fromIndex,
      toIndex,
    });
  } finally {
    release();
  }
}
