/** The same text in pieces of at least so many characters, but for the last: many small ones would be slow to write. */
export function* inChunks(parts: Iterable<string>, characters: number): Generator<string> {
  let chunk = '';
  for (const part of parts) {
    chunk += part;
    if (chunk.length < characters) continue;
    yield chunk;
    chunk = '';
  }
  if (chunk !== '') yield chunk;
}
