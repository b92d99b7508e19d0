/** Seeded chance (mulberry32): the same seed, the same drawing. */
export class Random {
  private state: number;

  constructor(seed: number) {
    this.state = seed >>> 0;
  }

  /** 0 ≤ x < 1. */
  share(): number {
    this.state = (this.state + 0x6d2b79f5) >>> 0;
    let t = this.state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  }

  between(least: number, most: number): number {
    return least + (most - least) * this.share();
  }

  /** A whole number, least and most included. */
  whole(least: number, most: number): number {
    return least + Math.floor(this.share() * (most - least + 1));
  }

  chance(share: number): boolean {
    return this.share() < share;
  }

  oneOf<T>(list: readonly T[]): T {
    return list[this.whole(0, list.length - 1)];
  }

  shuffled<T>(list: readonly T[]): T[] {
    const copy = [...list];
    for (let i = copy.length - 1; i > 0; i--) {
      const j = this.whole(0, i);
      [copy[i], copy[j]] = [copy[j], copy[i]];
    }
    return copy;
  }
}
