/** What can be done from the keyboard's line: a few words, and what they do. */
export interface Command {
  /** "publish an edition" */
  readonly words: string;
  /** Further words it is found by: "seal". */
  readonly also?: string;
  readonly run: () => void;
}

const wordsOf = (text: string): readonly string[] =>
  text
    .toLowerCase()
    .split(/\s+/)
    .filter((word) => word !== '');

/** Commands in which every word typed begins some word, those that begin with what is typed first. */
export function matching(commands: readonly Command[], typed: string): readonly Command[] {
  const wanted = wordsOf(typed);
  const found = commands.filter((command) => {
    const has = wordsOf(`${command.words} ${command.also ?? ''}`);
    return wanted.every((word) => has.some((one) => one.startsWith(word)));
  });
  const begins = (command: Command) => command.words.toLowerCase().startsWith(typed.trim().toLowerCase());
  return [...found.filter(begins), ...found.filter((command) => !begins(command))];
}
