export { Gallery as default } from '@/client/screens/gallery/gallery';
