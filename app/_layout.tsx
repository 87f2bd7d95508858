export { RootLayout as default } from '@/client/screens/shell/root-layout';
