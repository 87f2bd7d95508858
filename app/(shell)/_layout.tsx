export { ShellLayout as default } from '@/client/screens/shell/shell-layout';
