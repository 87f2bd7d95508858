export { MoreScreen as default } from '@/client/screens/more/more-screen';
