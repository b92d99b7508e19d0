/**
 * Names as shown: drawn names stay, a second thing of one name gets a number, an unnamed one a made-up name. No two
 * are equal, and none that was made up equals one that was drawn. Linear in the number of names.
 */
export class UniqueNames {
  readonly #state = new Map<string, 'drawn' | 'shown' | 'made'>();
  readonly #next = new Map<string, number>();

  /** @param drawn every name of the drawing that may be shown */
  constructor(drawn: Iterable<string>) {
    for (const name of drawn) this.#state.set(name, 'drawn');
  }

  /** Whether a name is shown that the drawing does not have: it means nothing in a run sheet. */
  isMade(name: string): boolean {
    return this.#state.get(name) === 'made';
  }

  /** `lane`, then `lane-2`, `lane-3` … */
  ofDrawn(name: string): string {
    if (this.#state.get(name) !== 'drawn') return this.#numbered(name);
    this.#state.set(name, 'shown');
    return name;
  }

  /** The made-up name itself unless the drawing uses it. */
  ofUnnamed(name: string): string {
    if (this.#state.has(name)) return this.#numbered(name);
    this.#state.set(name, 'made');
    return name;
  }

  #numbered(base: string): string {
    let n = this.#next.get(base) ?? 2;
    while (this.#state.has(`${base}-${n}`)) n++;
    const name = `${base}-${n}`;
    this.#next.set(base, n + 1);
    this.#state.set(name, 'made');
    return name;
  }
}
