import type { DuctForm } from '../physics/duct.ts';
import { sectionForm } from '../physics/section.ts';
import type { Channel, Chip } from './types.ts';

/** Form of a channel's duct; null where its width or depth is unknown. */
export function channelForm(
  { channels, sections }: { readonly channels: readonly Pick<Channel, 'section'>[] } & Pick<Chip, 'sections'>,
  channel: number,
): DuctForm | null {
  const { section } = channels[channel];
  return section < 0 ? null : sections[section];
}

/** Collects the sections of a chip while its channels are read: each profile, width and depth once, its series summed once. */
export class SectionList {
  readonly forms: DuctForm[] = [];
  readonly #known = new Map<string, number>();

  /** Index of a section; −1 where the width or depth is unknown. */
  indexOf(profile: Channel['profile'], ductWidthMm: number, depthMm: number): number {
    if (!(ductWidthMm > 0 && depthMm > 0)) return -1;
    const key = `${profile} ${ductWidthMm} ${depthMm}`;
    let index = this.#known.get(key);
    if (index === undefined) {
      index = this.forms.push(sectionForm(profile, ductWidthMm / 1000, depthMm / 1000)) - 1;
      this.#known.set(key, index);
    }
    return index;
  }
}
