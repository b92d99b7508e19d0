import { formatNumber, type Unit } from '../runsheet/shown.ts';
import { COLOUR_STEPS, type ColourScale, legendTicks, PALETTE } from './colour-scale.ts';
import type { Box } from './map-geometry.ts';
import { MAP_QUANTITIES } from './map-quantities.ts';
import type { MapLegend, MapOptions } from './map-types.ts';

/** The legend of a map, below the area in which its chip stands. */
export function legendOf(
  scale: ColourScale,
  unit: Unit,
  values: Float64Array,
  area: Box,
  options: MapOptions,
): MapLegend {
  const size = options.labelSizeMm;
  const width = 0.5 * area.width;
  const bar = {
    x: 0.04 * area.width,
    y: area.height + 1.5 * size,
    width,
    height: 1.2 * size,
  };
  const single = !(scale.high > scale.low);
  const ticks = spacedTicks(
    legendTicks(scale, unit.si).map((value) => ({
      x: bar.x + (single ? 0.5 : scale.offset(value)) * width,
      text: formatNumber(value / unit.si),
    })),
    size,
    options,
  );
  const missing = values.some((value) => scale.step(value) < 0);
  return {
    bar,
    colours: single ? [PALETTE[Math.round(0.5 * (COLOUR_STEPS - 1))]] : PALETTE,
    ticks,
    title: `${MAP_QUANTITIES[options.quantity].title}, ${unit.text}${scale.kind === 'log' ? ' (logarithmic)' : ''}${missing ? '; grey: no value or no flow' : ''}`,
    titleAt: [bar.x, bar.y - 1.35 * size],
    sizeMm: size,
  };
}

/** Both ends stay; an inner tick goes when its number would touch its neighbour's or the last one's. */
function spacedTicks(
  ticks: readonly { x: number; text: string }[],
  size: number,
  options: MapOptions,
): { x: number; text: string }[] {
  const half = (text: string): number => options.measure(text, size) / 2 + 0.5;
  const last = ticks[ticks.length - 1];
  const kept: { x: number; text: string }[] = [];
  for (const tick of ticks) {
    const before = kept.at(-1);
    const clearBefore = before === undefined || tick.x - before.x > half(tick.text) + half(before.text);
    const clearAfter = tick === last || last.x - tick.x > half(tick.text) + half(last.text);
    if ((clearBefore && clearAfter) || (kept.length === 0 && tick !== last) || (tick === last && clearBefore))
      kept.push(tick);
  }
  return kept;
}
