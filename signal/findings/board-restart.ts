import { wordsFor } from '@/signal/finding-words';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule } from '@/signal/findings/rule';
import type { BoardNote } from '@/signal/pipeline-types';

/** A restart is said for so long, s. */
const saidForS = 60;
/** So many within ten minutes, and it is no accident. */
const repeatedFrom = 3;

/** The board began a new stream where one had just been running: counts and turns start anew. */
export class BoardRestartRule implements FindingRule {
  readonly latches = [new FindingLatch(saidForS)];

  note(note: BoardNote, nowS: number): void {
    if (note.kind !== 'restart') return;
    const evidence = { awayS: note.awayS, restarts: note.restarts };
    this.latches[0]!.raise(
      {
        code: 'board-restart',
        channel: null,
        from: nowS,
        severity: note.restarts >= repeatedFrom ? 'fault' : 'warn',
        outcome: 'found',
        at: nowS,
        evidence,
        ...wordsFor('board-restart', null, evidence),
        causedBy: null,
      },
      nowS,
    );
  }

  tick(nowS: number): void {
    this.latches[0]!.rest(nowS);
  }
}
