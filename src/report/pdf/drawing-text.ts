/** "C-114 revision B": what of it the run sheet gives. */
export function drawingText({
  number,
  revision,
}: {
  readonly number: string | null;
  readonly revision: string | null;
}): string {
  return [number === null ? null : `drawing ${number}`, revision === null ? null : `revision ${revision}`]
    .filter((part) => part !== null)
    .join(', ');
}
