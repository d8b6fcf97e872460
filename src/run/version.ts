import { version as packageVersion } from '../../package.json' with { type: 'json' };

/** Version of the program. */
export const version: string = packageVersion;
