import { lazy, Suspense } from 'react';
import type { ComponentType } from 'react';
import { ErrorState, Loading } from '@/client/components/states';

/** A page in a file of its own, fetched when it is first opened. */
export function lazyPage<P extends object>(fetchPage: () => Promise<ComponentType<P>>): ComponentType<P> {
  const Page = lazy(async () => ({ default: await fetchPage().catch(() => NotFetched) }));
  return function LazyPage(props: P) {
    return (
      <Suspense fallback={<Loading label="Fetching the page" />}>
        <Page {...props} />
      </Suspense>
    );
  };
}

/** The hub is away, or has a newer version whose files bear other names: in both cases all is fetched anew. */
function NotFetched() {
  const reload = (globalThis as { location?: Location }).location;
  return (
    <ErrorState
      title="This page could not be fetched"
      message="Nothing is lost. Load the page again as soon as the hub can be reached."
      {...(reload ? { onRetry: () => reload.reload() } : {})}
    />
  );
}
