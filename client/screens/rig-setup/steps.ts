import type { FieldPath } from 'react-hook-form';
import type { RigDraft } from '@/client/screens/rig-setup/draft';

export type StepId = 'rig' | 'wheel' | 'channels' | 'speed';

export type Step = { id: StepId; title: string; fields: FieldPath<RigDraft>[] };

/** The form in the order in which people know the answers. */
export const steps: readonly Step[] = [
  { id: 'rig', title: 'Rig', fields: ['name', 'sensing'] },
  { id: 'wheel', title: 'Wheel', fields: ['wheel'] },
  { id: 'channels', title: 'Channels', fields: ['channels'] },
  { id: 'speed', title: 'Speed', fields: ['expectedDirection', 'ratedRpm', 'sampleRateHz'] },
];

/** The step that shows a field: `wheel.gearRatio` is shown by the second. */
export function stepOfPath(path: string): number {
  const at = steps.findIndex((s) => s.fields.some((field) => path === field || path.startsWith(`${field}.`)));
  return Math.max(0, at);
}
