import type { RawSocket } from '@/client/data/socket';

/** A browser's socket without a network: the test plays the hub. */
export class FakeLiveSocket implements RawSocket {
  readyState = 0;
  onopen: RawSocket['onopen'] = null;
  onmessage: RawSocket['onmessage'] = null;
  onclose: RawSocket['onclose'] = null;
  onerror: RawSocket['onerror'] = null;
  readonly sent: { type: string; [member: string]: unknown }[] = [];
  closedByPage = false;

  send(text: string): void {
    this.sent.push(JSON.parse(text));
  }

  close(): void {
    this.closedByPage = true;
    this.readyState = 3;
  }

  open(): void {
    this.readyState = 1;
    this.onopen?.(undefined as never);
  }

  say(message: unknown): void {
    this.onmessage?.({ data: typeof message === 'string' ? message : JSON.stringify(message) });
  }

  lose(code: number): void {
    this.readyState = 3;
    this.onclose?.({ code });
  }
}
