/**
 * What goes wrong on a rig, as data. `beginS` and `endS` count on the rig's own time, or within its loop where the
 * rig has one. Mechanical faults and drifts come and go over `easeS`; electrical ones switch.
 */

type Span = { beginS: number; endS: number };
type Eased = Span & { easeS?: number };
type OnChannel = Span & { channel?: string };

/** What the wheel and what turns it do. Positions and shares count in pitches of the wheel. */
type MechanicalFault =
  | (Eased & { kind: 'weak-tooth'; position: number; strength: number })
  | (Span & { kind: 'missing-tooth'; position: number })
  /** Teeth stand off their places: share of the pitch by position. */
  | (Eased & { kind: 'uneven-pitch'; shifts: Record<number, number> })
  /** Something stands on the rim at the place `at` (in positions), `strength` times a tooth, `width` of a pitch wide. */
  | (Eased & { kind: 'burr'; at: number; strength: number; width: number })
  /** A chip that sits elsewhere each turn, in so large a share of the turns. */
  | (Span & { kind: 'chips'; share: number; strength: number; width: number })
  /** The wheel's centre moves off its axis. */
  | (Eased & { kind: 'run-out'; addMm: number })
  | (Eased & { kind: 'gap'; addMm: number })
  /** All of the wheel's field, as a magnet does that lost its strength. */
  | (Eased & { kind: 'weak-magnet'; factor: number })
  /** The wheel shakes to and fro by so many degrees of one position. The truth leaves it out. */
  | (Eased & { kind: 'shake'; amplitudeDeg: number; hz: number });

/** What sensor, cable, supply and input do. */
type ElectricalFault =
  | (OnChannel & { kind: 'offset-drift'; offsetV: number; easeS?: number })
  | (OnChannel & { kind: 'clipping'; lowV?: number; highV?: number })
  /** `thirdShare`: its third harmonic, as transformers and lamps add. */
  | (OnChannel & { kind: 'hum'; amplitudeV: number; hz: number; thirdShare?: number })
  | (OnChannel & { kind: 'noise'; rmsV: number })
  | (OnChannel & { kind: 'dead-channel'; levelV: number })
  /** A loose contact: a switching sensor's line chatters for so long after each of its edges. */
  | (OnChannel & { kind: 'bounce'; bounceS: number })
  /** A switching sensor's line rings after each of its edges, beginning with that share of the step. */
  | (OnChannel & { kind: 'ringing'; hz: number; decayS: number; share: number })
  /** The pull-up of a switching sensor's line; `highV` where something loads it, so that it stays below the supply. */
  | (OnChannel & { kind: 'weak-pull-up'; ohm: number; highV?: number })
  /** Operate and release point of a switching sensor, both. */
  | (OnChannel & { kind: 'points-drift'; addMt: number; easeS?: number })
  | (OnChannel & { kind: 'phase'; degrees: number; easeS?: number })
  /** The line shows high for low, or a linear sensor faces the other pole. */
  | (OnChannel & { kind: 'inverted-line' })
  /** Two channels on each other's input. */
  | (Span & { kind: 'swapped-channels'; channels: [string, string] })
  /** Short pulses at random instants, so many a second. */
  | (OnChannel & { kind: 'spikes'; perS: number; heightV: number; widthS: number })
  /** The input holds its value for `forS` at random instants, so many a second; without a channel all at once. */
  | (OnChannel & { kind: 'freeze'; perS: number; forS: number })
  | (Span & { kind: 'supply-ripple'; amplitudeV: number; hz: number });

/** What the board does. */
type BoardFault =
  | (Span & { kind: 'lost-blocks' })
  /** The board is down from begin to end and comes back with a new stream name. */
  | (Span & { kind: 'restart' });

export type Fault = MechanicalFault | ElectricalFault | BoardFault;
export type FaultKind = Fault['kind'];

/** 0 outside the span, 1 well inside, half a cosine of `easeS` at either end. */
export function shareOf(fault: Span & { easeS?: number }, tS: number): number {
  if (tS < fault.beginS || tS >= fault.endS) return 0;
  const ease = Math.min(fault.easeS ?? 0, (fault.endS - fault.beginS) / 2);
  const inside = Math.min(tS - fault.beginS, fault.endS - tS);
  return inside >= ease ? 1 : 0.5 - 0.5 * Math.cos((Math.PI * inside) / ease);
}
