/**
 * The invented people of the Marrowfield Institute for Lattice Studies, whom the stand-in for GitHub offers at sign-in and
 * the demonstration writes notebooks for. `id` is the permanent number of their invented account.
 */
export interface InventedPerson {
  readonly id: number;
  readonly login: string;
  readonly name: string;
  readonly email: string;
  /** What they do at the institute, for whoever chooses one of them. */
  readonly part: string;
}

export const inventedPeople: readonly [InventedPerson, ...InventedPerson[]] = [
  {
    id: 9001,
    login: 'rokafor',
    name: 'R. Okafor',
    email: 'r.okafor@marrowfield.example',
    part: 'writes on gauge theories of magnets',
  },
  {
    id: 9002,
    login: 'lbrandt',
    name: 'L. Brandt',
    email: 'l.brandt@marrowfield.example',
    part: 'coauthor, counts states',
  },
  { id: 9003, login: 'mitsuno', name: 'M. Itsuno', email: 'm.itsuno@marrowfield.example', part: 'referee' },
  {
    id: 9004,
    login: 'tvasara',
    name: 'T. Vasara',
    email: 't.vasara@marrowfield.example',
    part: 'leads the reading group',
  },
  { id: 9005, login: 'dquell', name: 'D. Quell', email: 'd.quell@marrowfield.example', part: 'reads along' },
  {
    id: 9006,
    login: 'ysandoval',
    name: 'Y. Sandoval',
    email: 'y.sandoval@marrowfield.example',
    part: 'steward of this installation',
  },
];

/** The address of the one who runs the invented institute's installation. */
export const inventedSteward = 'y.sandoval@marrowfield.example';
