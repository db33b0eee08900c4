/** A part of a chapter: prose as in a notebook, and where it helps a whole source that runs as it stands. */
export interface Section {
  readonly heading: string;
  readonly prose: string;
  readonly example?: string;
}

export interface Chapter {
  /** Its name in the address. */
  readonly name: string;
  readonly title: string;
  /** What it answers, in a few words of the contents. */
  readonly about: string;
  readonly sections: readonly Section[];
}
