/** A path along points, x0 y0 x1 y1 …, not yet painted. */
export function trace(doc: PDFKit.PDFDocument, points: readonly number[]): void {
  doc.moveTo(points[0], points[1]);
  for (let i = 2; i < points.length; i += 2) doc.lineTo(points[i], points[i + 1]);
}
