/** A profile against its reference with the tolerance band, as SVG. Told apart by line style and label, not by colour alone. */
import type { Deviation, Profile } from '../../model/deviation.ts';
import { html, type Markup } from './markup.ts';

const WIDTH = 720;
const HEIGHT = 260;
const LEFT = 80;
const RIGHT = 16;
const TOP = 28;
const BOTTOM = 44;

export function plotProfileSvg(deviation: Deviation, profile: Profile): Markup {
  const along = profile.along.values;
  const shown = along.map((_, index) => index).filter((index) => Number.isFinite(along[index]));
  const values = shown
    .flatMap((index) => [profile.reference[index], profile.result[index]])
    .filter((value): value is number => value !== undefined && Number.isFinite(value));
  if (values.length === 0) return html`<p>No finite value to draw.</p>`;
  const positive = values.every((value) => value > 0);
  const log = positive && Math.max(...values) / Math.min(...values) > 1000;
  const [low, high] = withBand(Math.min(...values), Math.max(...values), shown, profile);
  const y = axis(log ? Math.min(...values) : low, log ? Math.max(...values) : high, HEIGHT - BOTTOM, TOP, log);
  const x = axis(along[shown[0]!]!, along[shown.at(-1)!]!, LEFT, WIDTH - RIGHT, false);
  const line = (of: readonly number[]) => path(shown, (index) => [x.at(along[index]!), y.at(of[index] ?? Number.NaN)]);
  const upper = shown.map((index) => (profile.reference[index] ?? 0) + (profile.band[index] ?? 0));
  const lower = shown.map((index) => (profile.reference[index] ?? 0) - (profile.band[index] ?? 0));
  const band = [
    ...shown.map((index, at) => [x.at(along[index]!), y.at(upper[at]!)] as const),
    ...[...shown.keys()].reverse().map((at) => [x.at(along[shown[at]!]!), y.at(lower[at]!)] as const),
  ].filter(([, height]) => Number.isFinite(height));
  const worst = deviation.measures?.worst;
  const at = worst?.along?.value;
  const title = `${deviation.quantity} of ${deviation.case} along ${profile.along.name}: ${deviation.class}`;
  return html`<figure>
<svg viewBox="0 0 ${WIDTH} ${HEIGHT}" role="img" aria-label="${title}" class="plot">
<polygon class="band" points="${band.map(([px, py]) => `${round(px)},${round(py)}`).join(' ')}"/>
${y.ticks.map((tick) => html`<g><line class="grid" x1="${LEFT}" x2="${WIDTH - RIGHT}" y1="${round(y.at(tick))}" y2="${round(y.at(tick))}"/><text x="${LEFT - 8}" y="${round(y.at(tick) + 4)}" text-anchor="end">${numberText(tick)}</text></g>`)}
<path class="reference" d="${line(profile.reference)}"/>
<path class="result" d="${line(profile.result)}"/>
${x.ticks.map((tick) => html`<text x="${round(x.at(tick))}" y="${HEIGHT - BOTTOM + 18}" text-anchor="middle">${numberText(tick)}</text>`)}
<text x="${(LEFT + WIDTH - RIGHT) / 2}" y="${HEIGHT - 6}" text-anchor="middle">${profile.along.name} ${unitText(profile.along.unit)}</text>
<text x="${LEFT}" y="16">${deviation.quantity} ${unitText(deviation.unit)}${log ? ', logarithmic' : ''}</text>
${at === undefined ? '' : html`<g><line class="worst" x1="${round(x.at(at))}" x2="${round(x.at(at))}" y1="${TOP}" y2="${HEIGHT - BOTTOM}"/><text x="${round(x.at(at) + (at > (x.low + x.high) / 2 ? -4 : 4))}" y="${TOP + 10}" text-anchor="${at > (x.low + x.high) / 2 ? 'end' : 'start'}">worst</text></g>`}
</svg>
<figcaption><span class="key"><svg viewBox="0 0 28 8" aria-hidden="true"><path class="result" d="M0 4H28"/></svg> result</span> <span class="key"><svg viewBox="0 0 28 8" aria-hidden="true"><path class="reference" d="M0 4H28"/></svg> reference</span> <span class="key"><svg viewBox="0 0 28 8" aria-hidden="true"><rect class="band" width="28" height="8"/></svg> tolerance</span></figcaption>
</figure>`;
}

/** The range of the curves, widened to show the whole band where that does not make the curves small. */
function withBand(low: number, high: number, shown: readonly number[], profile: Profile): [number, number] {
  let [bottom, top] = [low, high];
  for (const index of shown) {
    const [at, half] = [profile.reference[index] ?? Number.NaN, profile.band[index] ?? Number.NaN];
    if (!Number.isFinite(at - half) || !Number.isFinite(at + half)) continue;
    bottom = Math.min(bottom, at - half);
    top = Math.max(top, at + half);
  }
  return top - bottom <= 2 * (high - low) ? [bottom, top] : [low, high];
}

interface Axis {
  readonly low: number;
  readonly high: number;
  readonly ticks: readonly number[];
  at(value: number): number;
}

function axis(low: number, high: number, from: number, to: number, log: boolean): Axis {
  const scale = (value: number) => (log ? Math.log10(value) : value);
  const [first, last] = low === high ? [scale(low) - 0.5, scale(high) + 0.5] : [scale(low), scale(high)];
  const ticks = niceTicks(first, last, 5).map((tick) => (log ? 10 ** tick : tick));
  return { low, high, ticks, at: (value) => from + ((scale(value) - first) / (last - first)) * (to - from) };
}

/** About `count` round numbers inside the range: steps of 1, 2 or 5 times a power of ten. */
export function niceTicks(low: number, high: number, count: number): number[] {
  const rough = (high - low) / count;
  const power = 10 ** Math.floor(Math.log10(rough));
  const step = [1, 2, 5, 10].map((one) => one * power).find((one) => one >= rough) ?? rough;
  const ticks: number[] = [];
  for (let at = Math.ceil(low / step - 1e-9); at * step <= high + step * 1e-9; at++) ticks.push(at * step);
  return ticks;
}

function path(indices: readonly number[], point: (index: number) => readonly [number, number]): string {
  let drawn = '';
  let pen = 'M';
  for (const index of indices) {
    const [px, py] = point(index);
    if (!Number.isFinite(py)) {
      pen = 'M';
      continue;
    }
    drawn += `${pen}${round(px)} ${round(py)}`;
    pen = 'L';
  }
  return drawn;
}

function round(value: number): number {
  return Math.round(value * 10) / 10;
}

function numberText(value: number): string {
  const size = Math.abs(value);
  if (value !== 0 && (size >= 1e5 || size < 1e-3)) return value.toExponential(1).replace('.0e', 'e').replace('e+', 'e');
  return String(Number(value.toPrecision(6)));
}

function unitText(unit: string): string {
  return unit === '' ? '' : `[${unit}]`;
}
