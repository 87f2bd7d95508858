import { rigInput, type RigFields } from '@/server/contract';
import { rigOfDraft, type RigDraft } from '@/client/screens/rig-setup/draft';
import { issueWords, sentence } from '@/client/screens/rig-setup/issue-words';

/** Path of a form field and what is wrong there: `channels.0.name`. */
export type DraftError = { path: string; message: string };

export type DraftCheck = { ok: true; rig: RigFields } | { ok: false; errors: DraftError[] };

/** The contract's own check, in the form's words, at the form's paths. The first error of each field counts. */
export function checkDraft(draft: RigDraft): DraftCheck {
  const read = rigInput.safeParse(rigOfDraft(draft), { error: issueWords });
  if (read.success) return { ok: true, rig: read.data };
  const errors: DraftError[] = [];
  for (const issue of read.error.issues) {
    const path = formPath(issue.path.map(String));
    if (!errors.some((e) => e.path === path)) errors.push({ path, message: sentence(issue.message) });
  }
  return { ok: false, errors };
}

/** The field that a JSON pointer of the hub means (RFC 6901): `/wheel/gearRatio` is `wheel.gearRatio`. */
export function pathOfPointer(pointer: string): string {
  const parts = pointer.split('/').slice(1);
  return formPath(parts.map((part) => part.replaceAll('~1', '/').replaceAll('~0', '~')));
}

/** The form asks for widths in microseconds. Errors of the list as a whole stand at `root`. */
function formPath(parts: string[]): string {
  const path = parts.map((part) => (part === 'widthS' ? 'widthUs' : part)).join('.');
  return path === 'channels' || path === 'wheel.widthClasses' ? `${path}.root` : path;
}
