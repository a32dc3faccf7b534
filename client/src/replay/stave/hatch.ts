/** Slanted strokes where nothing was measured; the same slant as `.gap-hatch` of the design system. */
export function hatch(context: CanvasRenderingContext2D, x: number, y: number, width: number, height: number, colour: string, step = 5): void {
  context.save();
  context.beginPath();
  context.rect(x, y, width, height);
  context.clip();
  context.beginPath();
  context.strokeStyle = colour;
  context.lineWidth = 1;
  // Strokes stand on a grid of the page, not of the gap, so that neighbouring gaps line up.
  const first = Math.floor((x - height) / step) * step;
  for (let at = first; at < x + width; at += step) {
    context.moveTo(at, y + height);
    context.lineTo(at + height, y);
  }
  context.stroke();
  context.restore();
}
