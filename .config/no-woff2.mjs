// Stands in for brotli's decompressor in the bundle: fontkit needs it for WOFF2 fonts alone, and the embedded font is TrueType.
// It is 0.5 MB of source that would be read at every report.
export default function decompress() {
  throw new Error('WOFF2 fonts are not read here');
}
