import { z } from 'zod';

// The window's content policy forbids code made at run time, so schemas are interpreted and never compiled.
z.config({ jitless: true });

/** The schema library, set up for this program. */
export { z };
