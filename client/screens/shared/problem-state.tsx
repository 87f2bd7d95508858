import { ErrorState, EmptyState, NoPermission } from '@/client/components/states';
import { asProblem } from '@/client/data/api-problem';

type ProblemStateProps = {
  error: unknown;
  /** What could not be shown: "the rigs". */
  what: string;
  onRetry?: () => void;
};

/** In place of what could not be fetched: why not, and what to do next. */
export function ProblemState({ error, what, onRetry }: ProblemStateProps) {
  const problem = asProblem(error);
  if (problem.slug === 'forbidden')
    return <NoPermission message={problem.detail || `Your role does not open ${what}.`} />;
  if (problem.status === 404) {
    return (
      <EmptyState
        title="There is nothing here"
        message={`The hub does not have ${what}. It may have been deleted.`}
      />
    );
  }
  return (
    <ErrorState
      title={problem.title}
      message={problem.detail || `The hub could not give ${what}.`}
      onRetry={onRetry}
    />
  );
}
