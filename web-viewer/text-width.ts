let context: CanvasRenderingContext2D | null | undefined;

/** Width of a line of text in px; `font` as in CSS, e.g. "12px system-ui". */
export function textWidth(text: string, font: string): number {
  context ??= document.createElement('canvas').getContext('2d');
  if (!context) return text.length * 7;
  context.font = font;
  return context.measureText(text).width;
}
