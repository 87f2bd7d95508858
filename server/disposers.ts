/** What was started last is ended first; one that fails does not keep the others from ending. */
export class Disposers {
  readonly #steps: { name: string; end: () => Promise<void> | void }[] = [];
  #done: Promise<void> | undefined;

  constructor(private readonly onFailure: (name: string, error: unknown) => void) {}

  add(name: string, end: () => Promise<void> | void): void {
    this.#steps.push({ name, end });
  }

  /** Runs once; every caller waits for the same end. */
  dispose(): Promise<void> {
    this.#done ??= this.#run();
    return this.#done;
  }

  async #run(): Promise<void> {
    for (let step = this.#steps.pop(); step !== undefined; step = this.#steps.pop()) {
      try {
        await step.end();
      } catch (error) {
        this.onFailure(step.name, error);
      }
    }
  }
}
