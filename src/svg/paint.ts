import type { FunctionNode, Value } from 'css-tree';
import parseCss from 'css-tree/parser';
import { toNumber } from './numbers.ts';

/**
 * Whether a `stroke` or `fill` value puts anything visible down. Paint that we cannot judge (gradients, patterns, names,
 * variables) counts as visible, so that nothing drawn is left out.
 * @param color what `currentColor` stands for.
 */
export function paintIsVisible(paint: string, color: string): boolean {
  const key = paint.toLowerCase();
  if (key === 'none' || key === 'transparent') return false;
  if (key === 'currentcolor') return color.toLowerCase() !== 'currentcolor' && paintIsVisible(color, 'black');
  if (key.startsWith('#')) return !/^#(?:[0-9a-f]{3}0|[0-9a-f]{6}00)$/.test(key);
  // An alpha needs a slash or a third comma: spares the parser for plain rgb(…).
  if (!/^[a-z]+\(.*(?:\/|,.*,.*,)/.test(key) || key.length > 200) return true;
  return !isClear(key);
}

/** An opacity (number or percentage) as it counts: 1 when it cannot be read. */
export function parseOpacity(text: string): number {
  const trimmed = text.trim();
  const value = trimmed.endsWith('%') ? toNumber(trimmed.slice(0, -1)) / 100 : toNumber(trimmed);
  return Number.isNaN(value) ? 1 : Math.min(1, Math.max(0, value));
}

/** A colour function with an alpha of zero: rgba(0, 0, 0, 0), hsl(0 0% 0% / 0%), and the like. */
function isClear(paint: string): boolean {
  const value = parseCss(paint, { context: 'value' });
  const first = value.type === 'Value' ? onlyChild(value) : null;
  if (first?.type !== 'Function' || !/^(?:rgba?|hsla?|hwb|lab|lch|oklab|oklch|color)$/.test(first.name))
    return false;
  const alpha = alphaOf(first);
  return alpha !== null && parseOpacity(alpha) === 0;
}

function onlyChild(value: Value): FunctionNode | null {
  const child = value.children.first;
  return value.children.size === 1 && child?.type === 'Function' ? child : null;
}

/** After a slash, or the fourth of values with commas; null when there is none that is a number. */
function alphaOf(color: FunctionNode): string | null {
  const parts = color.children.toArray().filter((node) => node.type !== 'WhiteSpace');
  const commas = parts.filter((node) => node.type === 'Operator' && node.value === ',').length;
  const separator = parts.at(-2);
  const last = parts.at(-1);
  const isAlpha = separator?.type === 'Operator' && (separator.value === '/' || commas === 3);
  if (!isAlpha) return null;
  if (last?.type === 'Number') return last.value;
  return last?.type === 'Percentage' ? `${last.value}%` : null;
}
