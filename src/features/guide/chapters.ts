import type { Chapter } from './chapter.ts';
import { evidence } from './evidence.ts';
import { methods } from './methods.ts';
import { running } from './running.ts';
import { writing } from './writing.ts';

/** The chapters of the guide, in the order in which they are read. */
export const chapters: readonly Chapter[] = [...writing, evidence, methods, ...running];
