/** Look of the job sheet: prints in black on white, follows the system's dark setting on a screen. */
export const SHEET_STYLE = `
:root{color-scheme:light dark;--ink:#1d2126;--paper:#fff;--line:#767c84;--copper:#9a5a2b;--good:#0b5d3b;--bad:#a1121f;--soft:#f3f1ee}
@media (prefers-color-scheme:dark){:root{--ink:#eceae6;--paper:#191b1e;--line:#8d939b;--copper:#e0a06c;--good:#7fd6ab;--bad:#ff9b9b;--soft:#24272b}}
@media print{:root{--ink:#000;--paper:#fff;--line:#555;--copper:#7a431b;--good:#0b5d3b;--bad:#a1121f;--soft:#fff}.layer{break-inside:avoid}}
body{font:15px/1.5 system-ui,sans-serif;color:var(--ink);background:var(--paper);max-width:60rem;margin:2rem auto;padding:0 1rem}
h1{font-size:1.7rem;margin:0}h2{font-size:1.2rem;margin:2rem 0 .5rem;border-bottom:1px solid var(--line)}h3{font-size:1.1rem;margin:.2rem 0}
.good strong{color:var(--good)}.bad strong{color:var(--bad)}
.care{border:2px solid var(--bad);padding:.2rem 1rem;margin:1rem 0}.care h2{border:0;margin:.4rem 0}
table{border-collapse:collapse}th,td{text-align:left;padding:.15rem .8rem .15rem 0;vertical-align:top}
.classes th{font-weight:600;border-bottom:1px solid var(--line)}
.layer{background:var(--soft);border:1px solid var(--line);padding:.8rem 1rem;margin:1rem 0}
.two{display:grid;grid-template-columns:1fr 20rem;gap:1rem}@media (max-width:44rem){.two{grid-template-columns:1fr}}
.z{font-size:1.5rem;font-variant-numeric:tabular-nums;border:2px solid currentColor;padding:0 .4rem}
.box{display:inline-block;width:1rem;height:1rem;border:2px solid currentColor;vertical-align:-.1rem;margin-right:.3rem}
svg.picture{width:100%;height:auto;background:var(--paper);border:1px solid var(--line)}
.stroke{fill:none;stroke:var(--copper);stroke-linecap:round;stroke-linejoin:round}.frame{fill:none;stroke:var(--line)}
.cross{stroke:var(--ink)}.ghost{fill:none;stroke:var(--line);opacity:.45}.defs{position:absolute;width:0;height:0}
figure{margin:0}figcaption{font-size:.85rem}
code{overflow-wrap:anywhere}
`.trim();
