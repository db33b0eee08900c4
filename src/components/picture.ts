/** Drawings of the page as files of their own: colours and type written out, so that they look the same anywhere. */

const written = ['fill', 'stroke', 'stroke-width', 'stroke-dasharray', 'fill-opacity', 'stroke-opacity', 'opacity'];
const lettering = ['font-family', 'font-size', 'font-style', 'font-weight', 'text-anchor', 'dominant-baseline'];

/** The text of an SVG file that shows what `svg` shows on the page now, on the page's paper. */
export function svgText(svg: SVGSVGElement): string {
  const copy = svg.cloneNode(true) as SVGSVGElement;
  const originals = [...svg.querySelectorAll<SVGElement>('*')];
  const copies = [...copy.querySelectorAll<SVGElement>('*')];
  originals.forEach((original, k) => {
    const style = getComputedStyle(original);
    const names = original instanceof SVGTextContentElement ? [...written, ...lettering] : written;
    for (const name of names) {
      const value = style.getPropertyValue(name);
      if (value !== '') copies[k]?.setAttribute(name, value);
    }
  });
  for (const aid of copy.querySelectorAll('[data-aid]')) aid.remove();
  for (const one of [copy, ...copy.querySelectorAll('*')])
    for (const name of ['class', 'style', 'tabindex', 'role']) one.removeAttribute(name);
  const [x = 0, y = 0, width = 0, height = 0] = (svg.getAttribute('viewBox') ?? '').split(/[\s,]+/).map(Number);
  const paper = document.createElementNS('http://www.w3.org/2000/svg', 'rect');
  const sides = { x, y, width, height, fill: getComputedStyle(document.documentElement).getPropertyValue('--paper') };
  for (const [name, value] of Object.entries(sides)) paper.setAttribute(name, String(value));
  copy.prepend(paper);
  copy.setAttribute('xmlns', 'http://www.w3.org/2000/svg');
  const box = svg.getBoundingClientRect();
  copy.setAttribute('width', String(Math.round(box.width || width)));
  copy.setAttribute('height', String(Math.round(box.height || height)));
  return `<?xml version="1.0" encoding="UTF-8"?>\n${new XMLSerializer().serializeToString(copy)}\n`;
}

/** Offers a file to the browser's own download. */
export function saveFile(name: string, content: Blob): void {
  const address = URL.createObjectURL(content);
  const link = document.createElement('a');
  link.href = address;
  link.download = name;
  link.click();
  // The download has begun by the next turn.
  setTimeout(() => URL.revokeObjectURL(address), 1000);
}

export const saveText = (name: string, text: string, type: string): void =>
  saveFile(name, new Blob([text], { type: `${type};charset=utf-8` }));

export const saveSvg = (name: string, svg: SVGSVGElement): void =>
  saveText(`${name}.svg`, svgText(svg), 'image/svg+xml');

/** Pixels to a CSS pixel in a PNG: enough for print at half the size. */
const sharpness = 3;

/** Rejects where the browser cannot draw it. */
export async function savePng(name: string, svg: SVGSVGElement): Promise<void> {
  const text = svgText(svg);
  const image = new Image();
  // A data address: the page's policy lets images come from here and from data, from nowhere else.
  image.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(text)}`;
  await image.decode();
  const canvas = document.createElement('canvas');
  canvas.width = image.width * sharpness;
  canvas.height = image.height * sharpness;
  canvas.getContext('2d')?.drawImage(image, 0, 0, canvas.width, canvas.height);
  const png = await new Promise<Blob | null>((resolve) => canvas.toBlob(resolve, 'image/png'));
  if (!png) throw new Error('The browser could not make a picture of it.');
  saveFile(`${name}.png`, png);
}
