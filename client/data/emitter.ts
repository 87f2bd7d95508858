/** The whole of publish and subscribe that the stores need. */
export class Emitter {
  readonly #listeners = new Set<() => void>();

  get size(): number {
    return this.#listeners.size;
  }

  subscribe(listener: () => void): () => void {
    this.#listeners.add(listener);
    return () => {
      this.#listeners.delete(listener);
    };
  }

  emit(): void {
    for (const listener of [...this.#listeners]) listener();
  }
}
