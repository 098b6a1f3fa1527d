/** A report as one HTML file that needs nothing else: no network, no script, prints to paper, light and dark, readable without colour. */
import { type Finding, GRAVITIES } from '../model/finding.ts';
import { printPlace } from '../model/place.ts';
import { countText } from './finding-text.ts';
import { drawJoints } from './html/draw-joints.ts';
import { drawVersions } from './html/draw-versions.ts';
import { html, Markup } from './html/markup.ts';
import { plotProfileSvg } from './html/plot-profile.ts';
import { REPORT_STYLE } from './html/report-style.ts';
import { type Cell, cellText, type Report, type Section } from './report.ts';

export function reportHtml(report: Report): string {
  const drawn = report.deviations.filter((one) => one.profile !== undefined && one.class !== 'bit-for-bit');
  const body = html`<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'">
<title>${report.title}</title>
<style>${new Markup(REPORT_STYLE)}</style>
</head>
<body>
<header>
<h1>${report.title}</h1>
${report.outcome === undefined ? '' : html`<p class="outcome outcome-${report.outcome.split(' ')[0]}">${report.outcome}</p>`}
<p>${countText(report.findings)}${report.accepted.length === 0 ? '' : `, ${report.accepted.length} accepted`}</p>
${report.caution === null ? '' : html`<p class="safety"><strong>Caution.</strong> ${report.caution}</p>`}
<dl>${[{ name: 'made', value: report.made }, ...report.facts].map((fact) => html`<div><dt>${fact.name}</dt><dd>${fact.value}</dd></div>`)}</dl>
</header>
<main>
${
  report.findings.length === 0
    ? ''
    : html`<section aria-labelledby="findings"><h2 id="findings">Findings</h2>${GRAVITIES.map((gravity) =>
        group(
          gravity,
          report.findings.filter((one) => one.gravity === gravity),
        ),
      )}</section>`
}
${report.sections.map(sectionHtml)}
${(report.drawings ?? []).map((one) => html`<section><h2>${one.title}</h2>${one.draw === 'joints' ? drawJoints(one) : drawVersions(one)}</section>`)}
${drawn.length === 0 ? '' : html`<section aria-labelledby="profiles"><h2 id="profiles">Profiles</h2>${drawn.map((one) => html`<h3>${one.case}: ${one.quantity}</h3><p>${one.class}${one.tolerances === null ? '' : `, ${Number(one.tolerances.toPrecision(3))} of 1 tolerance`}</p>${plotProfileSvg(one, one.profile!)}`)}</section>`}
${report.accepted.length === 0 ? '' : html`<section aria-labelledby="accepted"><h2 id="accepted">Accepted</h2><ul>${report.accepted.map(({ finding, acceptance }) => html`<li><code>${finding.kind}</code> ${finding.says} <em>${acceptance.reason}</em>${acceptance.until === undefined ? '' : ` until ${acceptance.until}`}</li>`)}</ul></section>`}
</main>
</body>
</html>
`;
  return body.text;
}

function group(gravity: Finding['gravity'], findings: readonly Finding[]): Markup | string {
  if (findings.length === 0) return '';
  return html`<h3 class="${gravity}">${findings.length} ${gravity}${findings.length === 1 ? '' : 's'}</h3>${findings.map(findingHtml)}`;
}

function findingHtml(finding: Finding): Markup {
  return html`<details class="finding ${finding.gravity}"><summary><span class="gravity">${finding.gravity}</span> ${finding.module === undefined ? '' : html`<b>${finding.module}</b> `}${finding.says}</summary>
<p><code>${printPlace(finding.place)}</code> <code>${finding.kind}</code></p>
${finding.evidence.length === 0 ? '' : html`<ul>${finding.evidence.map((one) => html`<li>${one.place === undefined ? '' : html`<code>${printPlace(one.place)}</code> `}${one.says}${one.excerpt === undefined ? '' : html`<pre>${one.excerpt.text}</pre>`}</li>`)}</ul>`}
<p><strong>Next:</strong> ${finding.next}</p>
<p class="quiet">"mortise help ${finding.kind}" explains it.</p></details>`;
}

function sectionHtml(section: Section): Markup | string {
  const lines = section.lines ?? [];
  if (section.rows.length === 0 && lines.length === 0) return '';
  return html`<section><h2>${section.title}</h2>
${section.rows.length === 0 ? '' : html`<div class="scroll" tabindex="0" role="group" aria-label="${section.title}"><table><thead><tr>${section.head.map((name) => html`<th scope="col">${name === '' ? html`<span class="hidden">state</span>` : name}</th>`)}</tr></thead><tbody>${section.rows.map((row) => html`<tr>${row.map(cellHtml)}</tr>`)}</tbody></table></div>`}
${lines.map((one) => html`<p>${one}</p>`)}</section>`;
}

function cellHtml(cell: Cell): Markup {
  return typeof cell === 'string' ? html`<td>${cell}</td>` : html`<td class="${cell.mood}">${cellText(cell)}</td>`;
}
