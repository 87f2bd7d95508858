/** What `POST /rigs` and `POST /rigs/:rigId/settings` take, as plain shapes; the hub's own contract checks them. */

export type RigBody = {
  name: string;
  sensing: 'single' | 'quadrature' | 'three-hall' | 'width-coded';
  wheel: {
    pulsesPerTurn: number;
    missingPulses: number;
    gearRatio: number;
    widthClasses?: { widthS: number; means: 'forward' | 'reverse' | 'weak' }[];
  };
  channels: {
    name: string;
    role: 'A' | 'B' | 'Z' | 'U' | 'V' | 'W' | 'aux';
    voltsPerCode: number;
    codeOffset: number;
    minCode: number | null;
    maxCode: number | null;
    maxInputV: number | null;
    sensor: {
      kind: 'linear' | 'switch' | 'latch' | 'omnipolar';
      supplyV: number | null;
      quiescentV: number | null;
      sensitivityMvPerMt: number | null;
      activeLow: boolean;
      operateMt: number | null;
      releaseMt: number | null;
    };
  }[];
  expectedDirection: 'forward' | 'reverse' | null;
  ratedRpm: number | null;
};

type FilterBody =
  | { kind: 'none' }
  | {
      kind: 'lowpass' | 'highpass';
      family: 'butterworth' | 'bessel';
      order: 2 | 4 | 6 | 8;
      cutoffHz: number;
    };
export type SettingsBody = {
  reason: string;
  filter: FilterBody | FilterBody[];
  band:
    | { mode: 'fixed'; operateV: number; releaseV: number }
    | { mode: 'fitted'; operateFraction: number; releaseFraction: number };
  holdoffS: number;
  speed: { method: 'tooth' | 'turn' | 'window'; windowS: number; stoppedAfterS: number };
};
