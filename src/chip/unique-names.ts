/**
 * Names as shown: drawn names stay, a second thing of one name gets a number, an unnamed one a made-up name. No two
 * are equal, and none that was made up equals one that was drawn. Linear in the number of names.
 */
export class UniqueNames {
  readonly #state = new Map<string, 'drawn' | 'shown' | 'made'>();
  readonly #next = new Map<string, number>();

  /** Every name of the drawing that may be shown. */
  readonly drawn: ReadonlySet<string>;

  constructor(things: readonly { readonly name: string | null }[]) {
    this.drawn = new Set(things.flatMap(({ name }) => name ?? []));
    for (const name of this.drawn) this.#state.set(name, 'drawn');
  }

  /** Whether a name is shown that the drawing does not have: it means nothing in a run sheet. */
  isMade(name: string): boolean {
    return this.#state.get(name) === 'made';
  }

  /** `lane`, then `lane-2`, `lane-3` …; of an unnamed thing the made-up name, unless the drawing uses it. */
  next(drawnName: string | null, madeUp: string): string {
    const name = drawnName ?? madeUp;
    const state = this.#state.get(name);
    if (state !== (drawnName === null ? undefined : 'drawn')) return this.#numbered(name);
    this.#state.set(name, drawnName === null ? 'made' : 'shown');
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
