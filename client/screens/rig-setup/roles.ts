import { neededRoles } from '@/server/contract';
import type { ChannelRole, Sensing } from '@/signal/model';
import { emptyChannel, type ChannelDraft } from '@/client/screens/rig-setup/draft';

export const sensingWords: Record<Sensing, { label: string; help: string }> = {
  single: { label: 'One channel', help: 'Speed only: one channel cannot tell forward from reverse.' },
  quadrature: {
    label: 'Quadrature',
    help: 'Two channels a quarter of a tooth apart. Forward is A leading B.',
  },
  'three-hall': {
    label: 'Three Hall',
    help: 'Three channels a third apart. Forward is U, V, W rising in that order.',
  },
  'width-coded': { label: 'Width-coded', help: 'One channel; the width of each pulse says which way.' },
};

export const roleWords: Record<ChannelRole, string> = {
  A: 'A, counts',
  B: 'B, a quarter behind A',
  Z: 'Z, index, once a turn',
  U: 'U',
  V: 'V',
  W: 'W',
  aux: 'aux, only recorded',
};

export const mostChannels = 8;

/**
 * The channels after another sensing was chosen: those there take the roles needed in their order, missing ones are
 * added like the first, and what is over becomes `aux`. Index and aux channels stay.
 */
export function channelsFor(sensing: Sensing, before: readonly ChannelDraft[]): ChannelDraft[] {
  const needed: readonly ChannelRole[] = neededRoles[sensing];
  const extra = before.filter((c) => c.role === 'Z' || c.role === 'aux');
  const counting = before.filter((c) => !extra.includes(c));
  const kept = needed.map((role, i) => {
    const here = counting[i];
    if (!here) return { ...(before[0] ?? emptyChannel(role, role)), name: freeName(role, before), role };
    return { ...here, role, name: here.name === here.role ? role : here.name };
  });
  const over = counting.slice(needed.length);
  // A channel as it comes with the form is no loss; one that was renamed is.
  const renamed = over.filter((c) => c.name !== c.role).map((c) => ({ ...c, role: 'aux' as const }));
  return [...kept, ...renamed, ...extra].slice(0, mostChannels);
}

/** A name that no channel has yet. */
export function freeName(wanted: string, channels: readonly { name: string }[]): string {
  const taken = new Set(channels.map((c) => c.name));
  if (!taken.has(wanted)) return wanted;
  for (let i = 2; ; i += 1) if (!taken.has(`${wanted}${i}`)) return `${wanted}${i}`;
}
