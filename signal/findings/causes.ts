/**
 * Which finding follows from which: a consequence is folded under its cause where both are there together, or where the
 * cause ended no more than two seconds before the consequence began.
 */
import { findingCodes } from '@/signal/model';
import type { Finding, FindingCode } from '@/signal/model';

/** Possible causes of a finding, the nearest first. */
const causesOf: Partial<Record<FindingCode, readonly FindingCode[]>> = {
  'direction-flip': [
    'dead-channel',
    'inverted-channel',
    'illegal-state',
    'phase-error',
    'near-alias',
    'edge-bounce',
    'standstill-chatter',
    'supply-ripple',
    'lost-samples',
  ],
  'illegal-state': [
    'dead-channel',
    'inverted-channel',
    'near-alias',
    'edge-bounce',
    'phase-error',
    'weak-swing',
    'standstill-chatter',
    'supply-ripple',
    'lost-samples',
  ],
  'near-alias': ['standstill-chatter', 'dead-channel', 'mains-hum'],
  'wrong-count': ['illegal-state', 'edge-bounce', 'standstill-chatter', 'near-alias', 'lost-samples'],
  'missing-tooth': ['wrong-count', 'weak-swing', 'offset-drift', 'standstill-chatter'],
  'extra-pulse': ['edge-bounce', 'mains-hum', 'standstill-chatter', 'wrong-count'],
  'edge-bounce': ['slow-edge', 'mains-hum', 'supply-ripple', 'standstill-chatter', 'near-alias'],
  'duty-shift': ['inverted-channel', 'offset-drift', 'clipping', 'slow-edge', 'weak-swing', 'supply-ripple'],
  'slow-edge': ['near-alias', 'weak-swing', 'mains-hum', 'supply-ripple', 'standstill-chatter'],
  'uneven-teeth': ['missing-tooth', 'extra-pulse', 'edge-bounce', 'run-out', 'wrong-count', 'near-alias'],
  'run-out': ['missing-tooth', 'extra-pulse', 'supply-ripple', 'wrong-count'],
  'weak-swing': [
    'standstill-chatter',
    'inverted-channel',
    'run-out',
    'clipping',
    'supply-ripple',
    'illegal-state',
  ],
  'dead-channel': ['weak-swing'],
  clipping: ['offset-drift', 'supply-ripple'],
  'phase-error': ['dead-channel', 'inverted-channel', 'duty-shift', 'supply-ripple'],
  'standstill-chatter': ['mains-hum', 'supply-ripple'],
  'mains-hum': ['supply-ripple'],
  // Channels that stand still together now and then move in common.
  'supply-ripple': ['illegal-state'],
  'offset-drift': ['inverted-channel', 'supply-ripple'],
  'lost-samples': ['board-restart'],
};

/** Edges that are not those of the teeth make these of a sound wheel. */
const ofWrongEdges: readonly FindingCode[] = [
  'direction-flip',
  'illegal-state',
  'missing-tooth',
  'extra-pulse',
  'uneven-teeth',
  'run-out',
  'duty-shift',
  'slow-edge',
];
/** A hold-off that eats teeth these as well, on any channel. */
const ofHoldoff: readonly FindingCode[] = [...ofWrongEdges, 'phase-error', 'inverted-channel', 'weak-swing'];
/** Teeth that drown in noise, or that the filter takes away, these. */
const ofDrowned: readonly FindingCode[] = [
  ...ofWrongEdges,
  'edge-bounce',
  'wrong-count',
  'standstill-chatter',
];

const reachS = 2;

/**
 * The cause of `finding` among others that are open, or that ended lately. What cannot be told is no cause, nor is what
 * follows from the finding itself.
 * @returns null where none is known.
 */
export function causeOf(finding: Finding, others: readonly Finding[]): FindingCode | null {
  if (isHoldoff(finding) || isDrowned(finding)) return null;
  for (const other of others) {
    if (!reaches(other, finding) || followsFrom(other, finding.code, others)) continue;
    if (isHoldoff(other) && other.outcome === 'found' && ofHoldoff.includes(finding.code))
      return 'wrong-count';
    if (isDrowned(other) && ofDrowned.includes(finding.code) && sharesChannel(other, finding))
      return 'weak-swing';
  }
  const causes = causesOf[finding.code];
  if (!causes) return null;
  let best = causes.length;
  for (const other of others) {
    if (!reaches(other, finding)) continue;
    if (!sharesChannel(other, finding)) continue;
    if (other.outcome === 'cannot-tell' || followsFrom(other, finding.code, others)) continue;
    // Where each may follow from the other, the one that was there first is the cause.
    if (causesOf[other.code]?.includes(finding.code) && other.from > finding.from + reachS) continue;
    const rank = causes.indexOf(other.code);
    if (rank >= 0 && rank < best) best = rank;
  }
  return causes[best] ?? null;
}

function isHoldoff({ code, evidence }: Finding): boolean {
  return code === 'wrong-count' && evidence.by === 'hold-off';
}

/** So far that edges are made of what is no tooth. */
export function isDrowned({ code, outcome, severity, evidence }: Omit<Finding, 'to'>): boolean {
  const { against } = evidence;
  if (code !== 'weak-swing' || outcome !== 'found' || severity !== 'fault') return false;
  return against === 'filter' || against === 'noise';
}

function sharesChannel(one: Finding, other: Finding): boolean {
  return one.channel === null || other.channel === null || one.channel === other.channel;
}

function reaches(cause: Finding, { from }: Finding): boolean {
  return cause.to === null || cause.to >= from - reachS;
}

function followsFrom(finding: Finding, code: FindingCode, others: readonly Finding[]): boolean {
  let { causedBy } = finding;
  for (let steps = 0; causedBy !== null && steps < findingCodes.length; steps++) {
    if (causedBy === code) return true;
    const known: FindingCode = causedBy;
    causedBy = others.find((other) => other.code === known)?.causedBy ?? null;
  }
  return false;
}
