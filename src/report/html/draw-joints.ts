/** The joints of an assembly as SVG: modules down the side, each joint an arc from who expects to who offers. */
import type { Drawing } from '../report.ts';
import { html, type Markup } from './markup.ts';

type Joints = Extract<Drawing, { draw: 'joints' }>;

const ROW = 34;
const BOX = 260;
const CLASSES = {
  fits: 'joint-fits',
  'fits through an adapter': 'joint-adapter',
  'does not fit': 'joint-unfit',
} as const;

export function drawJoints({ title, modules, joints }: Joints): Markup {
  const names = [...new Set(modules.map((one) => one.module))];
  const y = (module: string) => 20 + names.indexOf(module) * ROW + 12;
  const known = joints.filter((one) => names.includes(one.from) && names.includes(one.to));
  const height = 20 + names.length * ROW + 10;
  const reach = Math.max(1, ...known.map((one) => Math.abs(names.indexOf(one.from) - names.indexOf(one.to))));
  const bulgeOf = (one: (typeof joints)[number]) =>
    BOX + 20 + (Math.abs(names.indexOf(one.from) - names.indexOf(one.to)) / reach) * 220;
  // Labels come after every arc, so that none is crossed out.
  const labels = known.filter((one) => one.state !== 'fits');
  return html`<figure>
<svg viewBox="0 0 720 ${height}" role="img" aria-label="${title}: ${known.map((one) => `${one.from} expects ${one.contract} of ${one.to}, ${one.state}`).join('; ')}" class="plot">
${known.map((one) => {
  const [from, to] = [y(one.from), y(one.to)];
  const bulge = bulgeOf(one);
  return html`<g><path class="${CLASSES[one.state]}" d="M${BOX} ${from}C${bulge} ${from} ${bulge} ${to} ${BOX} ${to}"/><circle class="${CLASSES[one.state]}-end" cx="${BOX}" cy="${to}" r="4"/></g>`;
})}
${labels.map((one) => html`<text x="${(BOX + 3 * bulgeOf(one)) / 4 + 6}" y="${(y(one.from) + y(one.to)) / 2 + 4}">${one.contract}: ${one.state}</text>`)}
${names.map((name) => html`<g><rect class="box" x="8" y="${y(name) - 13}" width="${BOX - 8}" height="26" rx="2"/><text x="16" y="${y(name) + 4}">${name}</text></g>`)}
</svg>
<figcaption>A dot marks the side that offers. Solid: fits; dashed: fits through an adapter; thick with a label: does not fit.</figcaption>
</figure>`;
}
