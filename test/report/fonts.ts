import { readFileSync } from 'node:fs';
import type { Fonts } from '../../src/report/pdf/options.ts';

const folder = new URL('../../node_modules/dejavu-fonts-ttf/ttf/', import.meta.url);

export const fonts: Fonts = {
  regular: new Uint8Array(readFileSync(new URL('DejaVuSans.ttf', folder))),
  bold: new Uint8Array(readFileSync(new URL('DejaVuSans-Bold.ttf', folder))),
};
