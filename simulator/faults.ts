/**
 * What goes wrong on a rig, as data. `beginS` and `endS` count on the rig's own time, or within its loop where the
 * rig has one. Mechanical faults and drifts come and go over `easeS`; electrical ones switch.
 */

type Span = { beginS: number; endS: number };
type OnChannel = Span & { channel?: string };

export type Fault =
  | (Span & { kind: 'weak-tooth'; position: number; strength: number; easeS?: number })
  | (Span & { kind: 'missing-tooth'; position: number })
  | (Span & { kind: 'gap'; addMm: number; easeS?: number })
  | (OnChannel & { kind: 'offset-drift'; offsetV: number; easeS?: number })
  | (OnChannel & { kind: 'clipping'; lowV?: number; highV?: number })
  | (OnChannel & { kind: 'hum'; amplitudeV: number; hz: number })
  | (OnChannel & { kind: 'noise'; rmsV: number })
  | (OnChannel & { kind: 'dead-channel'; levelV: number })
  | (OnChannel & { kind: 'bounce'; bounceS: number })
  | (OnChannel & { kind: 'phase'; degrees: number; easeS?: number })
  | (Span & { kind: 'supply-ripple'; amplitudeV: number; hz: number })
  | (Span & { kind: 'lost-blocks' })
  /** The board is down from begin to end and comes back with a new stream name. */
  | (Span & { kind: 'restart' });
export type FaultKind = Fault['kind'];

/** What faults do to the whole rig now. */
export type RigEffects = { gapAddMm: number; rippleV: number; rippleHz: number };
/** What faults do to one channel now. */
export type ChannelEffects = {
  offsetV: number;
  lowV: number;
  highV: number;
  humV: number;
  humHz: number;
  noiseV: number;
  deadV: number | null;
  bounceS: number;
  phaseDeg: number;
};

export function noRigEffects(): RigEffects {
  return { gapAddMm: 0, rippleV: 0, rippleHz: 0 };
}
export function noChannelEffects(): ChannelEffects {
  return {
    offsetV: 0,
    lowV: -Infinity,
    highV: Infinity,
    humV: 0,
    humHz: 0,
    noiseV: 0,
    deadV: null,
    bounceS: 0,
    phaseDeg: 0,
  };
}

/** 0 outside the span, 1 well inside, half a cosine of `easeS` at either end. */
export function shareOf(fault: Span & { easeS?: number }, tS: number): number {
  if (tS < fault.beginS || tS >= fault.endS) return 0;
  const ease = Math.min(fault.easeS ?? 0, (fault.endS - fault.beginS) / 2);
  const inside = Math.min(tS - fault.beginS, fault.endS - tS);
  return inside >= ease ? 1 : 0.5 - 0.5 * Math.cos((Math.PI * inside) / ease);
}

/** Adds one fault at time `tS` to the effects and to the wheel's strengths. */
export function applyFault(
  fault: Fault,
  tS: number,
  rig: RigEffects,
  channels: ReadonlyMap<string, ChannelEffects>,
  strengths: Float64Array,
): void {
  const share = shareOf(fault, tS);
  if (share === 0) return;
  switch (fault.kind) {
    case 'weak-tooth':
      strengths[fault.position] = (strengths[fault.position] ?? 0) * (1 - share * (1 - fault.strength));
      return;
    case 'missing-tooth':
      strengths[fault.position] = 0;
      return;
    case 'gap':
      rig.gapAddMm += share * fault.addMm;
      return;
    case 'supply-ripple':
      rig.rippleV = fault.amplitudeV;
      rig.rippleHz = fault.hz;
      return;
    case 'lost-blocks':
    case 'restart':
      return;
    default:
      for (const [name, effects] of channels) {
        if (fault.channel === undefined || fault.channel === name) applyToChannel(fault, share, effects);
      }
  }
}

type ChannelFault = Extract<
  Fault,
  OnChannel & { kind: 'hum' | 'noise' | 'dead-channel' | 'bounce' | 'phase' | 'offset-drift' | 'clipping' }
>;

function applyToChannel(fault: ChannelFault, share: number, effects: ChannelEffects): void {
  switch (fault.kind) {
    case 'offset-drift':
      effects.offsetV += share * fault.offsetV;
      return;
    case 'clipping':
      effects.lowV = fault.lowV ?? -Infinity;
      effects.highV = fault.highV ?? Infinity;
      return;
    case 'hum':
      effects.humV = fault.amplitudeV;
      effects.humHz = fault.hz;
      return;
    case 'noise':
      effects.noiseV = fault.rmsV;
      return;
    case 'dead-channel':
      effects.deadV = fault.levelV;
      return;
    case 'bounce':
      effects.bounceS = fault.bounceS;
      return;
    case 'phase':
      effects.phaseDeg += share * fault.degrees;
      return;
    default:
      fault satisfies never;
  }
}
