import type { Audit } from './audit.ts';
import { commute } from './commute.ts';
import { count } from './count.ts';
import { degeneracy } from './degeneracy.ts';
import { effective } from './effective.ts';
import { expect } from './expect.ts';
import { laws } from './laws.ts';
import { map } from './map.ts';
import { scan } from './scan.ts';
import { spectrum } from './spectrum.ts';
import { structure } from './structure.ts';

/** All audits by name; the language's table of forms names the same ones. */
export const audits: ReadonlyMap<string, Audit> = new Map(
  [commute, laws, map, spectrum, degeneracy, expect, scan, structure, count, effective].map((audit) => [
    audit.name,
    audit,
  ]),
);
