import type { Shown } from '../runsheet/shown.ts';
import type { MapQuantity } from './reach-values.ts';

/** What maps say of their quantity, the same on legends and in titles: in words, its unit, and what of it stands beside a port. */
export const MAP_QUANTITIES: Readonly<
  Record<
    MapQuantity,
    { readonly title: string; readonly shown: Shown; readonly atPort: 'pressure_pa' | 'flow_m3_s' | null }
  >
> = {
  pressure: { title: 'pressure in the chip', shown: 'pressure', atPort: 'pressure_pa' },
  shear: { title: 'mean wall shear on the floor', shown: 'wall_shear', atPort: null },
  flow: { title: 'flow', shown: 'flow', atPort: 'flow_m3_s' },
  residence: { title: 'residence time', shown: 'residence_time', atPort: null },
};
