/** The style sheet of the HTML report. Colours have a contrast of at least 4.5 to 1 on their ground (WCAG 2.2, 1.4.3). */
export const REPORT_STYLE = `
:root{color-scheme:light dark;--ground:#fdfcf9;--ink:#22262b;--quiet:#555d66;--line:#c9c6bd;--panel:#f3f1ea;--alarm:#a3211b;--warm:#7a5200;--good:#1f6138;--curve:#1d4f91;--band:#d9d2b8}
@media (prefers-color-scheme:dark){:root{--ground:#17191c;--ink:#e6e4de;--quiet:#a9afb6;--line:#43474d;--panel:#212429;--alarm:#ff9a92;--warm:#e9bd62;--good:#86d3a2;--curve:#8fb8f2;--band:#3d3a2c}}
*{box-sizing:border-box}
body{margin:0 auto;max-width:62rem;padding:1.5rem;background:var(--ground);color:var(--ink);font:1rem/1.5 system-ui,sans-serif}
h1{font-size:1.6rem;margin:0 0 .3rem}h2{font-size:1.2rem;margin:2rem 0 .5rem;border-bottom:1px solid var(--line)}h3{font-size:1rem;margin:1.2rem 0 .3rem}
.outcome{display:inline-block;margin:0;padding:.15rem .6rem;border:2px solid;font-weight:700}
.outcome-held{color:var(--alarm)}.outcome-cleared{color:var(--good)}
.safety{border-left:6px double var(--warm);padding-left:.8rem}
dl{display:grid;grid-template-columns:repeat(auto-fill,minmax(17rem,1fr));gap:.2rem 1.5rem;margin:1rem 0}dl div{display:flex;gap:.6rem;min-width:0}dt{color:var(--quiet);white-space:nowrap}dd{margin:0;overflow-wrap:anywhere}
table{border-collapse:collapse;width:100%}th,td{text-align:left;padding:.25rem .7rem .25rem 0;border-bottom:1px solid var(--line);vertical-align:top}th{font-weight:600;color:var(--quiet)}
td.alarm,h3.stop{color:var(--alarm);font-weight:700}td.warm,h3.caution{color:var(--warm);font-weight:600}td.good{color:var(--good)}
.scroll{overflow-x:auto}
details.finding{content-visibility:auto;contain-intrinsic-size:auto 2.2rem;border-left:4px solid var(--line);background:var(--panel);padding:.25rem .8rem;margin:.3rem 0}
details.stop{border-left-color:var(--alarm)}details.caution{border-left:4px dashed var(--warm)}
summary{cursor:pointer;overflow-wrap:anywhere}.gravity{font-variant:small-caps;color:var(--quiet)}
code,pre{font-family:ui-monospace,monospace;font-size:.9em;overflow-wrap:anywhere}pre{overflow-x:auto;margin:.3rem 0;padding:.4rem;background:var(--ground)}
.quiet{color:var(--quiet);font-size:.9rem}.hidden{position:absolute;width:1px;height:1px;overflow:hidden;clip-path:inset(50%)}
figure{margin:.5rem 0 1.5rem}figcaption{color:var(--quiet);font-size:.9rem}.key svg{width:28px;height:8px;vertical-align:middle}
svg.plot{width:100%;height:auto;max-height:26rem}svg.fixed{width:auto;max-width:none}
svg text{fill:var(--ink);font:12px system-ui,sans-serif;paint-order:stroke;stroke:var(--ground);stroke-width:3px}.box+text{stroke:none}svg text.small{font-size:10px}
.grid{stroke:var(--line)}.band{fill:var(--band)}.result{fill:none;stroke:var(--curve);stroke-width:2}.reference{fill:none;stroke:var(--ink);stroke-width:1.5;stroke-dasharray:2 4}.worst{stroke:var(--alarm);stroke-dasharray:6 3}
.box{fill:var(--panel);stroke:var(--line)}.joint-fits{fill:none;stroke:var(--quiet);stroke-width:1.5}.joint-adapter{fill:none;stroke:var(--warm);stroke-width:2;stroke-dasharray:6 4}.joint-unfit{fill:none;stroke:var(--alarm);stroke-width:4}
.joint-fits-end{fill:var(--quiet)}.joint-adapter-end{fill:var(--warm)}.joint-unfit-end{fill:var(--alarm)}
.asked{fill:var(--quiet)}.asked-undeclared{fill:var(--alarm)}.declared{fill:var(--good)}
:focus-visible{outline:3px solid var(--curve);outline-offset:2px}
@media print{body{max-width:none;padding:0}details.finding{content-visibility:visible;break-inside:avoid}details::details-content{content-visibility:visible;block-size:auto}}
`;
