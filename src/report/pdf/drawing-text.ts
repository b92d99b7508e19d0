import { joined } from '../plain-text.ts';

/** "C-114 revision B": what of it the run sheet gives. */
export function drawingText({
  number,
  revision,
}: Readonly<Record<'number' | 'revision', string | null>>): string {
  return joined(
    [number === null ? null : `drawing ${number}`, revision === null ? null : `revision ${revision}`],
    ', ',
  );
}
