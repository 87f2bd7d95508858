/** All parts of the accuracy table, in the order in which they are printed. */
import { edgesSection } from '@/tests/accuracy/edges-section';
import type { Section } from '@/tests/accuracy/section';

export const sections: Section[] = [edgesSection];
