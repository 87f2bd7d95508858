import type { Rig, RigKey } from '@/server/contract';
import { neededRoles } from '@/server/contract';
import type { LiveRig } from '@/client/data/live-types';
import { inputRange } from '@/client/screens/connect/test-signal';

export type CheckId = 'key' | 'block' | 'rate' | 'volts' | 'edges' | 'speed';
export type CheckState = 'waiting' | 'done' | 'wrong';
export type Check = {
  id: CheckId;
  title: string;
  state: CheckState;
  /** What was seen. */
  says: string;
  /** What to do while it is not done. */
  todo: string;
};

/** Share by which the rate that arrives may differ from the declared one: blocks come in bursts. */
const rateTolerance = 0.15;
/** Blocks come more often than this while a board streams, s. */
const longestWaitS = 0.4;
/** Past this much of the rated speed, a count is more likely wrong than the shaft. */
const mostOfRated = 1.5;
const leastOfRated = 0.01;
const rightDirection = (rig: Rig, direction: string) =>
  rig.expectedDirection === null ||
  direction === 'unknown' ||
  direction === 'stopped' ||
  direction === rig.expectedDirection;

/** What has been reached of the way from a key to a speed, as far as it shows now. */
export function checklist(rig: Rig, keys: readonly RigKey[], seen: LiveRig): Check[] {
  const live = seen.frame?.live ?? null;
  const usedKey = keys.find((k) => k.lastUsedAt !== null);
  const anyBlock = live !== null && live.lastBlockAt !== null;
  return [
    check('key', 'Key accepted', anyBlock || usedKey ? 'done' : 'waiting', usedKey?.name ?? '', [
      keys.length === 0
        ? 'Make a key above.'
        : 'Run the lines with the key. An answer of 401 or 403 means that the key was cut short or revoked.',
    ]),
    check(
      'block',
      'First block',
      anyBlock ? 'done' : 'waiting',
      live?.stream ? `stream ${live.stream}` : '',
      [
        'Nothing has come yet. The answer of the lines says why: no answer means that the board cannot reach the address.',
      ],
    ),
    rateCheck(seen),
    voltsCheck(rig, seen),
    edgesCheck(rig, seen),
    speedCheck(rig, seen),
  ];
}

/** What was done stays done while the page is open, unless it has gone wrong since. */
export function mergeChecks(before: readonly Check[], now: readonly Check[]): Check[] {
  return now.map((check) => {
    const old = before.find((c) => c.id === check.id);
    return check.state === 'waiting' && old?.state === 'done' ? old : check;
  });
}

function rateCheck(seen: LiveRig): Check {
  const { declaredHz, arrivingHz } = seen.frame?.live.rates ?? { declaredHz: null, arrivingHz: null };
  const todo = [
    'A block needs its rate, in samples a second of each channel.',
    'Fewer samples arrive than the rate says: the board loses some, or declares a rate that it does not keep.',
    'More samples arrive than the rate says: the board declares a rate below its own.',
  ];
  if (declaredHz === null) return check('rate', 'Rate', 'waiting', '', [todo[0]!]);
  const says = `${rateWords(declaredHz)} declared`;
  if (seen.frame?.live.state === 'silent' || arrivingHz === null)
    return check('rate', 'Rate', 'done', says, []);
  // At the end of a stream the arriving rate fades; that says nothing of the board.
  if (blockAgeS(seen) > longestWaitS) return check('rate', 'Rate', 'done', says, []);
  const share = arrivingHz / declaredHz;
  if (Math.abs(share - 1) <= rateTolerance) return check('rate', 'Rate', 'done', says, []);
  return check('rate', 'Rate', 'wrong', `${says}, ${rateWords(arrivingHz)} arrive`, [
    share < 1 ? todo[1]! : todo[2]!,
  ]);
}

/** Age of the newest block when the frame was made, s. */
function blockAgeS(seen: LiveRig): number {
  const at = seen.frame?.live.lastBlockAt;
  return at ? (Date.parse(seen.frame!.at) - Date.parse(at)) / 1000 : Infinity;
}

function voltsCheck(rig: Rig, seen: LiveRig): Check {
  const title = 'Volts in range';
  const live = seen.frame?.live;
  const shown = live?.channels.filter((c) => c.lowV !== null && c.highV !== null) ?? [];
  if (!live || shown.length === 0)
    return check('volts', title, 'waiting', '', ['Comes with the first teeth.']);
  const says = shown.map((c) => `${c.channel} ${c.lowV!.toFixed(2)} to ${c.highV!.toFixed(2)} V`).join(', ');
  for (const { channel, highV } of shown) {
    const setup = rig.channels.find((c) => c.name === channel);
    if (setup?.maxInputV && highV! > setup.maxInputV) {
      return check('volts', title, 'wrong', says, [
        `${channel} reaches ${highV!.toFixed(2)} V and its input takes ${setup.maxInputV} V. Take the board off the sensor now, then check the wiring and the scaling in Setup.`,
      ]);
    }
  }
  const finding = live.findings.find((f) => f.code === 'clipping' || f.code === 'dead-channel');
  if (finding) return check('volts', title, 'wrong', says, [`${finding.message} ${finding.remedy}`]);
  const tiny = shown.find((c) => {
    const setup = rig.channels.find((s) => s.name === c.channel);
    if (!setup) return false;
    const [low, high] = inputRange(setup);
    return c.highV! - c.lowV! < 0.01 * (high - low);
  });
  if (tiny) {
    return check('volts', title, 'wrong', says, [
      `${tiny.channel} hardly moves. Is the wheel turning, the sensor powered, the scaling in Setup right?`,
    ]);
  }
  return check('volts', title, 'done', says, []);
}

function edgesCheck(rig: Rig, seen: LiveRig): Check {
  const live = seen.frame?.live;
  const needed: readonly string[] = neededRoles[rig.sensing];
  const counting = rig.channels.filter((c) => needed.includes(c.role)).map((c) => c.name);
  const without = counting.filter((name) => !live?.channels.some((c) => c.channel === name && c.edges > 0));
  if (without.length === 0) return check('edges', 'Edges found', 'done', `on ${counting.join(', ')}`, []);
  return check('edges', 'Edges found', 'waiting', '', [
    `No edge yet on ${without.join(', ')}. Turn the wheel by hand (rig unpowered, hands clear of pinch points), look at the trace on Watch, bring the sensor nearer.`,
  ]);
}

function speedCheck(rig: Rig, seen: LiveRig): Check {
  const title = 'Speed plausible';
  const live = seen.frame?.live;
  const past = seen.speedHistory?.rpm.findLast((rpm) => rpm !== null) ?? null;
  const rpm = live?.state === 'running' ? live.speedRpm : past;
  if (rpm === null) return check('speed', title, 'waiting', '', ['Comes with the first whole turn.']);
  const says = `${Math.abs(rpm).toFixed(1)} rpm`;
  const rated = rig.ratedRpm;
  if (rated !== null && Math.abs(rpm) > mostOfRated * rated) {
    return check('speed', title, 'wrong', says, [
      `That is above the rated ${rated} rpm. Pulses per turn and gear in Setup right? A band too narrow counts noise.`,
    ]);
  }
  if (rated !== null && rpm !== 0 && Math.abs(rpm) < leastOfRated * rated) {
    return check('speed', title, 'wrong', says, [
      `That is far below the rated ${rated} rpm. Pulses per turn and gear in Setup right? A band too wide misses teeth.`,
    ]);
  }
  if (live && !rightDirection(rig, live.direction)) {
    return check('speed', title, 'wrong', `${says}, ${live.direction}`, [
      `The setup expects ${rig.expectedDirection}. Swap two channels, or their roles in Setup.`,
    ]);
  }
  return check('speed', title, 'done', says, []);
}

function check(id: CheckId, title: string, state: CheckState, says: string, todo: string[]): Check {
  return { id, title, state, says, todo: state === 'done' ? '' : (todo[0] ?? '') };
}

/** 20000 as "20 kS/s". */
export function rateWords(hz: number): string {
  return hz >= 1000 ? `${Number((hz / 1000).toPrecision(3))} kS/s` : `${Number(hz.toPrecision(3))} S/s`;
}
