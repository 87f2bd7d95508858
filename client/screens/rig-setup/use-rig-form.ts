import { set, useForm } from 'react-hook-form';
import type { FieldErrors, FieldPath, Resolver } from 'react-hook-form';
import type { RigFields, RigInput } from '@/server/contract';
import type { ApiProblem } from '@/client/data/api-problem';
import { checkDraft, pathOfPointer } from '@/client/screens/rig-setup/check-draft';
import { rigOfDraft, type RigDraft } from '@/client/screens/rig-setup/draft';

const resolver: Resolver<RigDraft, unknown, RigDraft> = (draft) => {
  const check = checkDraft(draft);
  if (check.ok) return { values: draft, errors: {} };
  const errors: FieldErrors<RigDraft> = {};
  for (const { path, message } of check.errors) set(errors, path, { type: 'contract', message });
  return { values: {}, errors };
};

/** The setup form, checked by the contract that the hub checks with. */
export function useRigForm(initial: RigDraft) {
  // Not on blur: a message that comes or goes while one presses a button moves the button away.
  return useForm<RigDraft, unknown, RigDraft>({ resolver, defaultValues: initial, mode: 'onChange' });
}

export type RigForm = ReturnType<typeof useRigForm>;

/** What the form means, for the hub. */
export function inputOf(draft: RigDraft): RigInput {
  return rigOfDraft(draft);
}

/** What is typed now, where it makes a rig. */
export function rigNow(draft: RigDraft): RigFields | null {
  const check = checkDraft(draft);
  return check.ok ? check.rig : null;
}

/** Puts the hub's errors to their fields. Returns the path of the first, or null where none names a field. */
export function placeErrors(form: RigForm, problem: ApiProblem): string | null {
  const paths = problem.errors.map(({ pointer, detail }) => {
    const path = pathOfPointer(pointer);
    if (path) form.setError(path as FieldPath<RigDraft>, { type: 'hub', message: detail });
    return path;
  });
  return paths.find((path) => path !== '') ?? null;
}
