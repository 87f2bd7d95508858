/** Who did something: the id for rights, the name as it was for reading later. */
export type Actor = { id: string | null; name: string };

/** RFC 3339, UTC. */
export function instant(ms: number): string {
  return new Date(ms).toISOString();
}

export function instantOrNull(ms: number | null): string | null {
  return ms === null ? null : instant(ms);
}
