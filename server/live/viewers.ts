/** All live sockets: made at the upgrade, closed when their sign-in ends. */
import type { WebSocket } from 'ws';
import { liveClose } from '@/server/contract';
import type { LiveSessions } from '@/server/hub/hub-types';
import type { ViewerOptions } from '@/server/live/viewer';
import { Viewer } from '@/server/live/viewer';

export class Viewers implements LiveSessions {
  readonly #all = new Set<Viewer>();

  constructor(private readonly options: ViewerOptions) {}

  get count(): number {
    return this.#all.size;
  }

  /** Takes an upgraded socket; the viewer has 5 s to say who it is. */
  attach(socket: WebSocket): void {
    this.#all.add(new Viewer(socket, this.options, (viewer) => this.#all.delete(viewer)));
  }

  personChanged(personId: string): void {
    this.#closeWhere((viewer) => viewer.identity?.personId === personId);
  }

  sessionEnded(familyId: string): void {
    this.#closeWhere((viewer) => viewer.identity?.familyId === familyId);
  }

  close(): void {
    for (const viewer of [...this.#all]) viewer.close(1001, 'the hub is stopping');
  }

  #closeWhere(match: (viewer: Viewer) => boolean): void {
    for (const viewer of [...this.#all]) {
      if (match(viewer)) viewer.close(liveClose.notSignedIn, 'the sign-in ended');
    }
  }
}
