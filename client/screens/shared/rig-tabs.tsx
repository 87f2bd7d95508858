import type { Href } from 'expo-router';
import { Tabs } from '@/client/components/tabs';
import { useMay } from '@/client/data/app-data-context';
import { rigPath } from '@/client/screens/shared/use-go';

type RigPage = 'watch' | 'setup' | 'connect';

/** The pages of one rig; those that change it stand open to engineers only. */
export function RigTabs({ rigId, current }: { rigId: string; current: RigPage }) {
  const may = useMay('engineer');
  const pages: [RigPage, string][] = may
    ? [
        ['watch', 'Watch'],
        ['setup', 'Setup'],
        ['connect', 'Connect'],
      ]
    : [['watch', 'Watch']];
  const tabs = pages.map(([page, label]) => ({
    label,
    href: rigPath[page](rigId) as Href,
    current: page === current,
  }));
  return <Tabs label="Pages of the rig" tabs={tabs} />;
}
