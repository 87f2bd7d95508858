export { NewRigScreen as default } from '@/client/screens/rig-setup/new-rig-screen';
