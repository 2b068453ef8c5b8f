import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { escapeHtml } from '../display';
import { compileSpec } from './render';
import type { Diagram } from './diagram';
import { fontFile } from './font';
import { fontFamily } from './theme';

const load = createRequire(__filename);

/** Text that may stand inside a script element: nothing in it can end the element or open a comment. */
function scriptText(code: string): string {
  return code.replace(/<(?=\/script|!--|script)/gi, '\\x3C');
}

/** JSON that may stand inside a script element. */
function scriptJson(value: unknown): string {
  return JSON.stringify(value).replace(/</g, '\\u003c').replace(/\u2028/g, '\\u2028').replace(/\u2029/g, '\\u2029');
}

/**
 * One page that holds a diagram, its fonts and what draws it. The specification is compiled here, so that the page needs Vega alone; its
 * policy forbids every connection.
 */
export function diagramPage(diagram: Diagram, svg: string): string {
  const vega = readFileSync(join(dirname(load.resolve('vega')), 'vega.min.js'), 'utf8').replace(/\/\/# sourceMappingURL=.*$/m, '');
  const face = (name: 'regular' | 'italic' | 'bold', style: string) =>
    `@font-face{font-family:"${fontFamily}";${style};src:url(data:font/ttf;base64,${readFileSync(fontFile(name)).toString('base64')}) format("truetype")}`;
  const fonts = [face('regular', 'font-weight:400'), face('italic', 'font-weight:400;font-style:italic'), face('bold', 'font-weight:600')].join('\n');
  return `<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; script-src 'unsafe-inline' 'unsafe-eval'; style-src 'unsafe-inline'; font-src data:; img-src data:">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${escapeHtml(diagram.name)}</title>
<style>
${fonts}
body{margin:24px;background:#fff;color:#1a1a1a;font-family:"${fontFamily}",sans-serif}
svg{max-width:100%;height:auto}
#note{position:fixed;display:none;pointer-events:none;background:#fff;border:1px solid #999;border-radius:3px;padding:4px 8px;font-size:13px;white-space:pre;box-shadow:0 1px 4px rgba(0,0,0,.2)}
</style>
</head>
<body>
<div id="diagram" role="img" aria-label="${escapeHtml(diagram.description)}">${svg}</div>
<div id="note"></div>
<script>${scriptText(vega)}</script>
<script>
(function () {
  var place = document.getElementById('diagram');
  var note = document.getElementById('note');
  var still = place.innerHTML;
  // Texts of samples only ever become text, never markup.
  function tooltip(handler, event, item, value) {
    if (value === null || value === undefined) { note.style.display = 'none'; return; }
    note.textContent = typeof value === 'object' ? Object.keys(value).map(function (name) { return name + ': ' + value[name]; }).join('\\n') : String(value);
    note.style.display = 'block';
    note.style.left = Math.min(event.clientX + 14, window.innerWidth - note.offsetWidth - 8) + 'px';
    note.style.top = Math.min(event.clientY + 14, window.innerHeight - note.offsetHeight - 8) + 'px';
  }
  try {
    place.textContent = '';
    new vega.View(vega.parse(${scriptJson(compileSpec(diagram.spec))}), { renderer: 'svg', container: place, hover: true, tooltip: tooltip }).runAsync()
      .catch(function () { place.innerHTML = still; });
  } catch (error) {
    place.innerHTML = still;
  }
})();
</script>
</body>
</html>
`;
}
