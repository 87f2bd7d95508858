export { ShellLayout as default } from '@/client/components/shell-layout';
