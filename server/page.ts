/** Pages that the server writes itself, where the client is not at work: stand-ins, and what a mail's link opens. */

export const escapeHtml = (text: string): string =>
  text.replace(/[&<>"']/g, (sign) => `&#${String(sign.charCodeAt(0))};`);

/** A whole page around a body of HTML; `nonce` is the one of the answer, for its style. */
export function plainPage(title: string, nonce: string, body: string): string {
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light dark">
<title>${escapeHtml(title)}</title>
<style nonce="${escapeHtml(nonce)}">
:root { color-scheme: light dark; }
body { max-width: 34rem; margin: 12vh auto; padding: 0 1.5rem; font: 1.0625rem/1.6 Georgia, serif;
  color: light-dark(#1c1b19, #e8e4da); background: light-dark(#fdfcf9, #171614); overflow-wrap: anywhere; }
h1 { font-size: 1.5rem; font-weight: 500; margin: 0 0 .5rem; }
h2 { font-size: 1.125rem; font-weight: 600; margin: 0; }
ul { list-style: none; margin: 1.5rem 0; padding: 0; border-top: 1px solid light-dark(#c9c4b8, #4a463e); }
li { display: flex; flex-wrap: wrap; gap: 0 1rem; align-items: baseline; border-bottom: 1px solid light-dark(#c9c4b8, #4a463e); }
a { padding: .55rem 0; color: light-dark(#7a1f12, #f0a08f); text-underline-offset: .2em; }
li > a:first-child { flex: 0 0 9rem; }
article { margin: 1.5rem 0; border-top: 1px solid light-dark(#c9c4b8, #4a463e); padding-top: 1rem; }
pre { font: inherit; white-space: pre-wrap; margin: .75rem 0 0; }
button { font: inherit; padding: .35rem 1rem; color: inherit; background: none; border: 1px solid; border-radius: 2px; cursor: pointer; }
a:focus-visible, button:focus-visible { outline: 2px solid; outline-offset: 2px; }
</style>
</head>
<body>
<main>
<h1>${escapeHtml(title)}</h1>
${body}
</main>
</body>
</html>
`;
}
