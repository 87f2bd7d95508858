// One file of the web app for both pages: they share the form.
export { NewRigScreen } from '@/client/screens/rig-setup/new-rig-screen';
export { RigSetupScreen } from '@/client/screens/rig-setup/rig-setup-screen';
