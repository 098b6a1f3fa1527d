/** Drift along the versions of a module as SVG: a step a commit, the bump asked above the bump declared. */
import type { Drawing } from '../report.ts';
import { html, type Markup } from './markup.ts';

type Versions = Extract<Drawing, { draw: 'versions' }>;

const HEIGHTS: Readonly<Record<string, number>> = { none: 1, patch: 14, minor: 28, major: 42 };

export function drawVersions({ title, steps }: Versions): Markup {
  const width = Math.max(360, 40 + steps.length * 34);
  return html`<figure>
<div class="scroll" tabindex="0" role="group" aria-label="${title}">
<svg viewBox="0 0 ${width} 150" width="${width}" height="150" role="img" aria-label="${title}: ${steps.map((one) => `${one.date} ${one.version ?? ''} asks for ${one.asked}, declared ${one.declared}`).join('; ')}" class="plot fixed">
<line class="grid" x1="20" x2="${width - 10}" y1="70" y2="70"/>
${steps.map((one, index) => {
  const x = 30 + index * 34;
  const [asked, declared] = [HEIGHTS[one.asked] ?? 1, HEIGHTS[one.declared] ?? 1];
  return html`<g><title>${one.date} ${one.says}</title><rect class="${one.undeclared ? 'asked-undeclared' : 'asked'}" x="${x}" y="${70 - asked}" width="18" height="${asked}"/><rect class="declared" x="${x}" y="70" width="18" height="${declared}"/>${one.undeclared ? html`<text x="${x + 9}" y="${66 - asked}" text-anchor="middle">!</text>` : ''}<text class="small" transform="translate(${x + 12} 146) rotate(-60)">${one.version ?? ''}</text></g>`;
})}
</svg>
</div>
<figcaption>Above the line: the bump that the change asks for; below: the bump declared; ! marks what was not declared.</figcaption>
</figure>`;
}
