import type { Wall } from '../physics/duct-state.ts';
import type { ChannelEntry } from '../runsheet/types.ts';

/** Whether a window is asked of a channel. */
export function hasWindow(settings: ChannelEntry | null): settings is ChannelEntry {
  return (
    settings !== null &&
    (settings.wallShear !== null || settings.residenceTime !== null || settings.flow !== null)
  );
}

/** The walls of a channel on which its shear window is asked. */
export function wallsOf({ walls }: Pick<ChannelEntry, 'walls'>): readonly Wall[] {
  return walls === 'all' ? ['floor', 'side'] : ['floor'];
}
