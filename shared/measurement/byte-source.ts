/**
 * A file's bytes in order, piece by piece, as often as asked: the reader passes over a file several times (encoding,
 * layout, numbers) and a file of 64 MiB must not be held in memory for that.
 */
export type ByteSource = () => Iterable<Uint8Array>

export const fromBytes =
  (bytes: Uint8Array): ByteSource =>
  () => [bytes]

export const toSource = (input: Uint8Array | ByteSource): ByteSource =>
  input instanceof Uint8Array ? fromBytes(input) : input

/** The first `length` bytes, or fewer where the file is shorter. */
export const firstBytes = (source: ByteSource, length: number): Uint8Array => {
  const first = new Uint8Array(length)
  let filled = 0
  for (const piece of source()) {
    const taken = piece.subarray(0, length - filled)
    first.set(taken, filled)
    filled += taken.length
    if (filled === length) break
  }
  return first.subarray(0, filled)
}
