export { AccountScreen as default } from '@/client/screens/account/account-screen';
