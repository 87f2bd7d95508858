import { lazyPage } from '@/client/screens/shell/lazy-page';

const Gallery = lazyPage(async () => (await import('@/client/screens/gallery/gallery')).Gallery);

export default Gallery;
