/** What both ways of sending have in common. */
import type { Clock } from '@/simulator/clock';
import type { Outbox } from '@/simulator/outbox';
import type { WireFormat } from '@/simulator/wire';

export type SenderEvent =
  | { kind: 'connected' }
  | { kind: 'acked'; stream: string; seq: number }
  | { kind: 'refused'; detail: string }
  | { kind: 'retry'; afterMs: number; reason: string }
  | { kind: 'ended'; reason: string };

export type SenderOptions = {
  /** Origin of the hub, e.g. http://192.0.2.7:4680 */
  baseUrl: string;
  key: string;
  format: WireFormat;
  outbox: Outbox;
  clock: Clock;
  random: () => number;
  onEvent: (event: SenderEvent) => void;
};

export type Sender = {
  /** There is something new in the outbox. */
  wake(): void;
  /** Resolves when nothing waits for an ack any more, when sending has ended for good, or when the signal is aborted. */
  drained(signal: AbortSignal): Promise<void>;
  /** Stops at once; what is not acked stays in the outbox. */
  stop(): Promise<void>;
  /** Set once sending cannot go on (a refused key). */
  readonly endedBecause: string | undefined;
};

/** A flag that can be waited for. */
export function createSignalFlag(): { raise(): void; wait(signal: AbortSignal): Promise<void> } {
  let raised = false;
  let wake: (() => void) | undefined;
  return {
    raise() {
      raised = true;
      wake?.();
    },
    wait: (signal) =>
      new Promise((resolve) => {
        const done = () => {
          raised = false;
          wake = undefined;
          signal.removeEventListener('abort', done);
          resolve();
        };
        if (raised || signal.aborted) return done();
        wake = done;
        signal.addEventListener('abort', done, { once: true });
      }),
  };
}
