/** A drawing of the report as an SVG file of its own, with the style it needs inside. */
import type { Markup } from './markup.ts';
import { REPORT_STYLE } from './report-style.ts';

/** @returns null when the markup holds no drawing */
export function standaloneSvg(drawing: Markup): string | null {
  const svg = /<svg [\s\S]*<\/svg>/.exec(drawing.text)?.[0];
  if (svg === undefined) return null;
  const opened = svg.replace(/^<svg /, '<svg xmlns="http://www.w3.org/2000/svg" ');
  const end = opened.indexOf('>') + 1;
  return `${opened.slice(0, end)}<style><![CDATA[${REPORT_STYLE}]]></style>${opened.slice(end)}\n`;
}
