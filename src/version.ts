/** The version of the program, as its package states it. */
import { createRequire } from 'node:module';

export const VERSION = (createRequire(import.meta.url)('../package.json') as { version: string }).version;
