import { z } from 'zod';

// Zod compiles its checks with `new Function` where it may. The hub's content policy forbids that, and even the
// attempt is reported as a breach. Must run before any schema is made: import it first.
z.config({ jitless: true });
