// One file of the web app for all that replays.
export { MadeUpReplay } from '@/client/screens/replay/made-up-replay';
export { ReplayScreen } from '@/client/screens/replay/replay-screen';
