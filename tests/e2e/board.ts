/** A board on the bench: raised cosines of a wheel of 24 teeth at 500 rpm, posted as JSON blocks. */
import { sharedHub } from '@/tests/e2e/bench-person';

export const boardRpm = 500;
const rateHz = 5000;
const toothHz = 200;
const blockS = 0.1;
const blockLength = rateHz * blockS;

export type Block = { stream: string; seq: number; rate: number; time: number; samples: { A: number[] } };

export const cleanSwingV = 1.3;
/** Far more than the sensor's supply allows: the signal stands at its rails. */
export const cutOffSwingV = 6;

/** Block `seq` of the stream; what goes past the rails of the sensor is cut off. */
export function block(stream: string, seq: number, swingV = cleanSwingV): Block {
  const volts = (i: number) => {
    const t = (seq * blockLength + i) / rateHz;
    const freeV = 1.65 - swingV * Math.cos(2 * Math.PI * toothHz * t);
    return Math.min(3.2, Math.max(0.1, Number(freeV.toFixed(4))));
  };
  return {
    stream,
    seq,
    rate: rateHz,
    time: seq * blockS,
    samples: { A: Array.from({ length: blockLength }, (_, i) => volts(i)) },
  };
}

export async function post(key: string, blocks: Block | Block[]): Promise<void> {
  const answer = await fetch(`${sharedHub().url}/ingest/v1/samples`, {
    method: 'POST',
    headers: { authorization: `Bearer ${key}`, 'content-type': 'application/json' },
    body: JSON.stringify(blocks),
  });
  if (!answer.ok) throw new Error(`samples: ${answer.status} ${await answer.text()}`);
}

/** Streams in real time until stopped. `stop` waits for the block under way. */
export function stream(key: string, name: string, swingV = cleanSwingV): { stop(): Promise<void> } {
  let seq = 0;
  let last: Promise<void> = Promise.resolve();
  const send = () => {
    last = last.then(() => post(key, block(name, seq++, swingV)));
    last.catch(() => undefined);
  };
  send();
  const timer = setInterval(send, blockS * 1000);
  return {
    stop: async () => {
      clearInterval(timer);
      await last;
    },
  };
}
