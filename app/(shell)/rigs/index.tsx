export { RigsScreen as default } from '@/client/screens/rigs/rigs-screen';
