/**
 * The engine, compiling. Imported before everything else, so that the compiler, which has threads of its own, is at
 * work while the rest of the script is still being read.
 */

import { compiledEngine } from './blocks.js';

export const compiling = compiledEngine();

// Whoever waits for it hears of a failure; until somebody does, it is no stray error.
compiling.catch(() => undefined);
