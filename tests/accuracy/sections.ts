/** All parts of the accuracy table, in the order in which they are printed. */
import { boundSection } from '@/tests/accuracy/bound-section';
import { directionSection } from '@/tests/accuracy/direction-section';
import { edgesSection } from '@/tests/accuracy/edges-section';
import { findingSections } from '@/tests/accuracy/findings';
import type { Section } from '@/tests/accuracy/section';
import { speedSection } from '@/tests/accuracy/speed-section';

export const sections: Section[] = [
  edgesSection,
  speedSection,
  directionSection,
  boundSection,
  ...findingSections,
];
