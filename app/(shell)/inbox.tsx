export { InboxScreen as default } from '@/client/screens/inbox/inbox-screen';
