/** The cases of each code whose cause is on the rig. The hub's own, clock-drift and board-restart, need facts of the board. */
import type { FindingCode } from '@/signal/model';
import type { CaseMaker } from '@/tests/accuracy/findings/case';
import { clipping } from '@/tests/accuracy/findings/cases/clipping';
import { deadChannel } from '@/tests/accuracy/findings/cases/dead-channel';
import { directionFlip } from '@/tests/accuracy/findings/cases/direction-flip';
import { dutyShift } from '@/tests/accuracy/findings/cases/duty-shift';
import { edgeBounce } from '@/tests/accuracy/findings/cases/edge-bounce';
import { extraPulse } from '@/tests/accuracy/findings/cases/extra-pulse';
import { illegalState } from '@/tests/accuracy/findings/cases/illegal-state';
import { invertedChannel } from '@/tests/accuracy/findings/cases/inverted-channel';
import { lostSamples } from '@/tests/accuracy/findings/cases/lost-samples';
import { mainsHum } from '@/tests/accuracy/findings/cases/mains-hum';
import { missingTooth } from '@/tests/accuracy/findings/cases/missing-tooth';
import { nearAlias } from '@/tests/accuracy/findings/cases/near-alias';
import { offsetDrift } from '@/tests/accuracy/findings/cases/offset-drift';
import { phaseError } from '@/tests/accuracy/findings/cases/phase-error';
import { runOut } from '@/tests/accuracy/findings/cases/run-out';
import { slowEdge } from '@/tests/accuracy/findings/cases/slow-edge';
import { standstillChatter } from '@/tests/accuracy/findings/cases/standstill-chatter';
import { supplyRipple } from '@/tests/accuracy/findings/cases/supply-ripple';
import { unevenTeeth } from '@/tests/accuracy/findings/cases/uneven-teeth';
import { weakSwing } from '@/tests/accuracy/findings/cases/weak-swing';
import { wrongCount } from '@/tests/accuracy/findings/cases/wrong-count';

export type CaseCode = Exclude<FindingCode, 'clock-drift' | 'board-restart'>;

export const caseMakers: Record<CaseCode, CaseMaker> = {
  'weak-swing': weakSwing,
  clipping,
  'offset-drift': offsetDrift,
  'mains-hum': mainsHum,
  'edge-bounce': edgeBounce,
  'missing-tooth': missingTooth,
  'extra-pulse': extraPulse,
  'uneven-teeth': unevenTeeth,
  'run-out': runOut,
  'phase-error': phaseError,
  'duty-shift': dutyShift,
  'illegal-state': illegalState,
  'lost-samples': lostSamples,
  'near-alias': nearAlias,
  'slow-edge': slowEdge,
  'dead-channel': deadChannel,
  'direction-flip': directionFlip,
  'wrong-count': wrongCount,
  'standstill-chatter': standstillChatter,
  'inverted-channel': invertedChannel,
  'supply-ripple': supplyRipple,
};

export const caseCodes = Object.keys(caseMakers) as CaseCode[];
