/** What the accuracy table is made of: sections, each of which runs rigs of known truth and yields rows. */

export type Row = {
  /** Which goal, in a few words: `edges found`, `finding: weak-swing`. */
  what: string;
  /** The rig and what it went through. */
  conditions: string;
  goal: string;
  measured: string;
  pass: boolean;
};

export type AccuracyOptions = {
  /** How often each case is run with seeds of its own; 1 unless asked for more. */
  rounds: number;
  /** Lower case. A section leaves out the rows that cannot match, where that saves it work; the engine filters them anyway. */
  only: string | null;
};

export type Section = {
  name: string;
  /**
   * @param random a fresh integer seed for each label: the same label gives the same seed in a run repeated with `--seed`,
   *   whatever ran before; labels are unique within a section.
   */
  run(random: (label: string) => number, options: AccuracyOptions): Iterable<Row> | AsyncIterable<Row>;
};

/** Whether a row or a case is wanted by `--only`. */
export function isWanted(options: AccuracyOptions, ...words: string[]): boolean {
  return options.only === null || words.join(' ').toLowerCase().includes(options.only);
}
