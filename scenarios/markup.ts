/** Text as it may stand in HTML or SVG, between tags or in an attribute in double quotes: never read as markup. */
export function escaped(text: string): string {
  return text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;');
}
