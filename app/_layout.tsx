export { RootLayout as default } from '@/client/components/root-layout';
