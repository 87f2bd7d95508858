import type { Migration } from '../migrate';
import { init } from './001-init';

export const spoolMigrations: readonly Migration[] = [init];
