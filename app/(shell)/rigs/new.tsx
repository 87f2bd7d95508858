import { lazyPage } from '@/client/screens/shell/lazy-page';

const NewRigScreen = lazyPage(async () => (await import('@/client/screens/rig-setup/pages')).NewRigScreen);

export default NewRigScreen;
