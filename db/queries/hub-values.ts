import type { TurnmarkDb } from '../schema';

/** Small things that the hub remembers about itself. */
export async function getHubValue(db: TurnmarkDb, key: string): Promise<string | null> {
  const row = await db.selectFrom('hub_value').select('value').where('key', '=', key).executeTakeFirst();
  return row?.value ?? null;
}

export async function setHubValue(db: TurnmarkDb, key: string, value: string): Promise<void> {
  await db
    .insertInto('hub_value')
    .values({ key, value })
    .onConflict((oc) => oc.column('key').doUpdateSet({ value }))
    .execute();
}
