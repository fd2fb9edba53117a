/** Arrays of doubles as stored: little-endian, whatever the machine. */
export const toBytes = (numbers: Float64Array): Buffer => {
  const bytes = Buffer.allocUnsafe(8 * numbers.length)
  numbers.forEach((value, index) => bytes.writeDoubleLE(value, 8 * index))
  return bytes
}

export const fromBytes = (bytes: Buffer): number[] => {
  if (bytes.length % 8 !== 0) throw new Error(`expected a multiple of 8 bytes; found ${bytes.length}`)
  return Array.from({ length: bytes.length / 8 }, (_, index) => bytes.readDoubleLE(8 * index))
}
