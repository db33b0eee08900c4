import { sql, type SQL } from 'drizzle-orm';
import type { Grade } from '../../../shared/contracts/report.ts';
import type { mapKinds } from '../../../shared/contracts/reviews.ts';
import type { PageAsked } from '../page.ts';
import { entries, notebooks, parting } from '../schema/notebooks.ts';
import { people } from '../schema/people.ts';
import { claims, editions } from '../schema/work.ts';

type MapKind = (typeof mapKinds)[number];

/** What a list of notebooks is narrowed by. */
export interface Search extends PageAsked {
  readonly q: string;
  readonly lattice?: string | undefined;
  readonly map?: MapKind | undefined;
  readonly grade?: Grade | undefined;
}

/** Conditions on rows of `notebooks` joined with their owner as `people`. */
export function found({ q, lattice, map, grade }: Search): SQL[] {
  const words = q.split(/\s+/).filter((word) => word !== '');
  return [
    ...words.map(holdsWord),
    ...(lattice === undefined ? [] : [hasLattice(lattice)]),
    ...(map === undefined ? [] : [hasMap(map)]),
    ...(grade === undefined ? [] : [hasGrade(grade)]),
  ];
}

/** Notebooks with an entry of which something holds. The index of words is asked once, not once a notebook. */
const withEntry = (condition: SQL): SQL => sql`${notebooks.id} in (select ${entries.notebook} from ${entries}
  where ${entries.deletedAt} is null and ${condition})`;

const head = sql`(${notebooks.title} || ' ' || array_to_string(${notebooks.authors}, ' ') || ' ' || ${people.name})`;

/** A word of the search stands in the title, among the authors, in the owner's name, or in an entry. */
function holdsWord(word: string): SQL {
  const pattern = `%${word.replace(/[\\%_]/g, '\\$&')}%`;
  return sql`(${head} ilike ${pattern} or ${withEntry(entryHolds(word))})`;
}

/** A plain word stands at the beginning of one; what has punctuation ("s^z[l.a]") stands there to the letter. */
function entryHolds(word: string): SQL {
  if (/^[\p{L}\p{N}]+$/u.test(word)) return sql`${entries.words} @@ to_tsquery('simple', ${`'${word}':*`})`;
  const exact = sql`position(lower(${word}) in lower(${entries.text})) > 0`;
  if (!/[\p{L}\p{N}]/u.test(word)) return exact;
  const parts = sql`phraseto_tsquery('simple', translate(${word}, ${sql.raw(parting)}))`;
  return sql`(${entries.words} @@ ${parts} and ${exact})`;
}

/** Statements that match a regular expression of PostgreSQL, found by words that each match holds. */
const statements = (holding: string, pattern: string): SQL =>
  withEntry(
    sql`${entries.kind} = 'statements' and ${entries.words} @@ plainto_tsquery('simple', ${holding}) and ${entries.text} ~ ${pattern}`,
  );

function hasLattice(lattice: string): SQL {
  const name = lattice.replace(/[^\p{L}\p{N}]/gu, '');
  return statements(`lattice ${name}`, `(^|\\n)lattice\\s+${name}\\M`);
}

/** How a map is declared (DESIGN.md section 3): the word that every such line holds, and the line. */
const mapPatterns: Readonly<Record<MapKind, readonly [word: string, pattern: string]>> = {
  dictionary: ['from', 'from\\s'],
  gauging: ['gauge', '=\\s*gauge\\M'],
  circuit: ['circuit', '=\\s*circuit\\M'],
  solving: ['solve', '=\\s*solve\\M'],
  states: ['on', 'on\\s'],
  composition: ['', '=\\s*(inverse\\s|\\S+\\s+then\\M)'],
};

function hasMap(kind: MapKind): SQL {
  const [word, pattern] = mapPatterns[kind];
  return statements(`map ${word}`, `(^|\\n)map\\s+\\S+\\s*${pattern}`);
}

/** The newest sealed edition makes a claim of this grade. */
const hasGrade = (grade: Grade): SQL => sql`exists (select 1 from ${claims} where ${claims.grade} = ${grade}
  and ${claims.edition} = (select ${editions.id} from ${editions} where ${editions.notebook} = ${notebooks.id}
    and ${editions.status} = 'sealed' order by ${editions.number} desc limit 1))`;
