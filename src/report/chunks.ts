const CHUNK = 65_536;

/** Pieces of a text joined into chunks of about 64 kB. */
export function* inChunks(pieces: Iterable<string>): Generator<string> {
  let pending = '';
  for (const piece of pieces) {
    pending += piece;
    if (pending.length < CHUNK) continue;
    yield pending;
    pending = '';
  }
  yield pending;
}
