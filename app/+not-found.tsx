export { NotFoundScreen as default } from '@/client/screens/more/not-found-screen';
