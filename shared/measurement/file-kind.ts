/** Files that are no delimited text, whatever their name says: first bytes and what to call them. */
const signatures: readonly { bytes: readonly number[]; offset?: number; kind: string }[] = [
  { bytes: [0x50, 0x4b, 0x03, 0x04], kind: 'a ZIP archive (a spreadsheet file, perhaps)' },
  { bytes: [0x50, 0x4b, 0x05, 0x06], kind: 'an empty ZIP archive' },
  { bytes: [0xd0, 0xcf, 0x11, 0xe0], kind: 'a binary office document' },
  { bytes: [0x25, 0x50, 0x44, 0x46], kind: 'a PDF document' },
  { bytes: [0x89, 0x50, 0x4e, 0x47], kind: 'a PNG image' },
  { bytes: [0xff, 0xd8, 0xff], kind: 'a JPEG image' },
  { bytes: [0x47, 0x49, 0x46, 0x38], kind: 'a GIF image' },
  { bytes: [0x49, 0x49, 0x2a, 0x00], kind: 'a TIFF image' },
  { bytes: [0x4d, 0x4d, 0x00, 0x2a], kind: 'a TIFF image' },
  { bytes: [0x7f, 0x45, 0x4c, 0x46], kind: 'a program' },
  { bytes: [0x4d, 0x5a, 0x90, 0x00], kind: 'a program' },
  { bytes: [0x1f, 0x8b], kind: 'a gzip archive' },
  { bytes: [0x42, 0x5a, 0x68], kind: 'a bzip2 archive' },
  { bytes: [0xfd, 0x37, 0x7a, 0x58, 0x5a], kind: 'an xz archive' },
  { bytes: [0x37, 0x7a, 0xbc, 0xaf], kind: 'a 7z archive' },
  { bytes: [0x52, 0x61, 0x72, 0x21], kind: 'a RAR archive' },
  { bytes: [0x75, 0x73, 0x74, 0x61, 0x72], offset: 257, kind: 'a tar archive' },
  { bytes: [0x89, 0x48, 0x44, 0x46], kind: 'an HDF5 file' },
  { bytes: [0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59], kind: 'a NumPy array file' },
  { bytes: [0x7b, 0x5c, 0x72, 0x74, 0x66], kind: 'a rich-text document' },
]

const textSignatures: readonly { start: RegExp; kind: string }[] = [
  { start: /^<!doctype html|^<html/i, kind: 'an HTML page' },
  { start: /^<\?xml|^<svg/i, kind: 'an XML or SVG document' },
  { start: /^MATLAB 5\.0 MAT-file/, kind: 'a binary matrix file' },
]

/** Names the kind of a file that is certainly no delimited text; undefined where it may be one. */
export const foreignKind = (first: Uint8Array): string | undefined => {
  const known = signatures.find(({ bytes, offset = 0 }) => bytes.every((byte, index) => first[offset + index] === byte))
  if (known !== undefined) return known.kind
  const start = String.fromCharCode(...first.subarray(0, 64)).trimStart()
  return textSignatures.find((signature) => signature.start.test(start))?.kind
}

/** Bytes that a sniffer needs to tell the kinds apart. */
export const kindBytes = 512
