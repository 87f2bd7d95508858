/** What the findings are worth: faults caught, and alarms on sound rigs. */
import { alarmSection } from '@/tests/accuracy/findings/alarms';
import { caughtSection } from '@/tests/accuracy/findings/caught';
import type { Section } from '@/tests/accuracy/section';

export const findingSections: Section[] = [caughtSection, alarmSection];
