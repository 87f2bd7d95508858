export { Gallery as default } from '@/client/screens/watch/gallery';
