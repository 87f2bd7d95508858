export { ShelfScreen as default } from '@/client/screens/shelf/shelf-screen';
