/** The look of an exported page: plain, dark on white, the same on screen and paper. Text contrast is 4.5 : 1 or better throughout. */
export const pageStyle = `
:root { color-scheme: light; }
body { margin: 0; background: #fff; color: #1d1d1f; font: 16px/1.55 system-ui, -apple-system, "Segoe UI", "Noto Sans", Arial, sans-serif; }
main { max-width: 62rem; margin: 0 auto; padding: 2rem 1.5rem 4rem; }
h1 { font-size: 1.9rem; line-height: 1.2; margin: 0 0 1rem; }
h2 { font-size: 1.35rem; margin: 2.2rem 0 .6rem; padding-bottom: .2rem; border-bottom: 1px solid #d5d5d8; }
h3 { font-size: 1.1rem; margin: 1.6rem 0 .4rem; }
a { color: #0b5394; }
pre, code { font: 13px/1.5 ui-monospace, SFMono-Regular, Menlo, Consolas, "Noto Sans Mono", monospace; }
pre { margin: .4rem 0; white-space: pre-wrap; overflow-wrap: anywhere; }
.cell { margin: 1rem 0 1.4rem; }
.code { position: relative; background: #f6f6f4; border-left: 3px solid #b9b9b3; padding: .5rem .8rem; }
.code .count { position: absolute; right: .6rem; top: .35rem; font-size: 12px; color: #666; }
.code pre { margin: 0; }
.stream { color: #3c3c40; }
.stream.aside { color: #6b5200; }
.error { background: #fdf1f0; border-left: 3px solid #b3261e; padding: .5rem .8rem; color: #7a1a14; }
figure { margin: .8rem 0; }
figure img { max-width: 100%; height: auto; }
.shown { overflow-x: auto; margin: .6rem 0; }
.shown p { margin: .3rem 0; color: #4a4a4e; font-size: .9rem; }
table { border-collapse: collapse; border: 0; font-size: .875rem; font-variant-numeric: tabular-nums; }
caption { text-align: left; font-weight: 600; padding: .2rem 0 .4rem; }
th, td { border: 0; border-bottom: 1px solid #dedee2; padding: .25rem .7rem .25rem 0; text-align: left; vertical-align: top; }
td[align="right"], th[align="right"] { text-align: right; }
thead th { border-bottom: 2px solid #8a8a90; }
blockquote { margin: .8rem 0; padding: .1rem 1rem; border-left: 3px solid #b9b9b3; color: #3c3c40; }
@page { margin: 18mm 16mm; }
@media print {
  main { max-width: none; padding: 0; }
  body { font-size: 10.5pt; }
  pre, code { font-size: 8.5pt; }
  figure, .error, tr { break-inside: avoid; }
  .code { break-after: avoid; }
  h1, h2, h3, caption { break-after: avoid; }
  .shown { overflow: visible; }
  a { color: inherit; text-decoration: none; }
}
`;
