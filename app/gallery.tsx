import { lazy, Suspense } from 'react';

const Gallery = lazy(async () => ({ default: (await import('@/client/screens/gallery/gallery')).Gallery }));

export default function GalleryRoute() {
  return (
    <Suspense fallback={null}>
      <Gallery />
    </Suspense>
  );
}
