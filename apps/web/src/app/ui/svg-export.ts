/**
 * A chart as a file that looks as it does on the page: what the style sheets say is written into the drawing as attributes, the paper is
 * laid under it, and the title and the finding are set above it.
 */

/** What style sheets may set on a drawing; each is also an SVG presentation attribute (SVG 2, section 6.6). */
const properties = [
  'fill',
  'fill-opacity',
  'stroke',
  'stroke-width',
  'stroke-opacity',
  'stroke-dasharray',
  'stroke-linejoin',
  'stroke-linecap',
  'opacity',
  'visibility',
  'font-size',
  'font-weight',
  'font-family',
  'text-anchor',
  'dominant-baseline',
] as const;

const ns = 'http://www.w3.org/2000/svg';

function styled(original: SVGSVGElement): SVGSVGElement {
  const copy = original.cloneNode(true) as SVGSVGElement;
  const from = [original, ...original.querySelectorAll('*')];
  const to = [copy, ...copy.querySelectorAll('*')];
  from.forEach((element, i) => {
    const computed = getComputedStyle(element);
    const target = to[i];
    if (computed.display === 'none') target.setAttribute('display', 'none');
    for (const property of properties) {
      const value = computed.getPropertyValue(property);
      if (value) target.setAttribute(property, value);
    }
    for (const name of ['class', 'tabindex', 'style', 'aria-live']) target.removeAttribute(name);
    for (const { name } of [...target.attributes])
      if (name.startsWith('_ng') || name.startsWith('ng-')) target.removeAttribute(name);
  });
  return copy;
}

function line(text: string, y: number, size: number, weight: number, colour: string, family: string): SVGTextElement {
  const element = document.createElementNS(ns, 'text');
  const attributes = { x: 16, y, 'font-size': size, 'font-weight': weight, fill: colour, 'font-family': family };
  for (const [name, value] of Object.entries(attributes)) element.setAttribute(name, String(value));
  element.textContent = text;
  return element;
}

/** Words broken into lines of about this many characters. */
export function wrapped(text: string, length: number): string[] {
  const lines: string[] = [];
  for (const word of text.split(/ +/)) {
    const last = lines.at(-1);
    if (last !== undefined && last.length + word.length + 1 <= length) lines[lines.length - 1] = `${last} ${word}`;
    else lines.push(word);
  }
  return lines;
}

/** One SVG document of all drawings, stacked, with title and finding. */
export function svgText(svgs: readonly SVGSVGElement[], title: string, finding: string | null): string {
  const root = getComputedStyle(document.body);
  const ink = root.color;
  const family = root.fontFamily;
  const width = Math.max(320, ...svgs.map((svg) => svg.getBoundingClientRect().width)) + 32;
  const doc = document.createElementNS(ns, 'svg');
  const paper = document.createElementNS(ns, 'rect');
  doc.append(paper);
  const name = document.createElementNS(ns, 'title');
  name.textContent = title;
  doc.prepend(name);
  let y = 32;
  doc.append(line(title, y, 17, 600, ink, family));
  for (const text of finding ? wrapped(finding, Math.floor((width - 32) / 7.2)) : []) {
    y += 21;
    doc.append(line(text, y, 15, 400, ink, family));
  }
  y += 20;
  for (const svg of svgs) {
    const box = svg.getBoundingClientRect();
    const copy = styled(svg);
    copy.setAttribute('x', '16');
    copy.setAttribute('y', String(y));
    copy.setAttribute('width', String(box.width));
    copy.setAttribute('height', String(box.height));
    doc.append(copy);
    y += box.height + 8;
  }
  y += 8;
  paper.setAttribute('width', '100%');
  paper.setAttribute('height', '100%');
  paper.setAttribute('fill', root.backgroundColor);
  doc.setAttribute('viewBox', `0 0 ${width} ${y}`);
  doc.setAttribute('width', String(width));
  doc.setAttribute('height', String(y));
  return new XMLSerializer().serializeToString(doc);
}

const dataUrl = (blob: Blob): Promise<string> =>
  new Promise((resolve, reject) => {
    const reader = new FileReader();
    reader.onload = () => resolve(reader.result as string);
    reader.onerror = () => reject(reader.error ?? new Error('the font could not be read'));
    reader.readAsDataURL(blob);
  });

/**
 * The page's own typeface as @font-face rules that carry the font: a picture made from a drawing may fetch nothing. Latin letters and
 * digits are enough for charts.
 */
async function typeface(): Promise<string> {
  const rules = [...document.styleSheets]
    .flatMap((sheet) => [...sheet.cssRules])
    .filter((rule) => rule instanceof CSSFontFaceRule)
    .filter((rule) => rule.style.getPropertyValue('unicode-range').replaceAll(' ', '').toUpperCase().startsWith('U+0-FF'));
  const written = rules.map(async (rule) => {
    const [, url] = /url\("?([^")]+\.woff2)"?\)/.exec(rule.style.getPropertyValue('src')) ?? [];
    if (url === undefined) return '';
    const font = await fetch(new URL(url, rule.parentStyleSheet?.href ?? document.baseURI));
    const { style } = rule;
    const face = `font-family:${style.getPropertyValue('font-family')};font-weight:${style.getPropertyValue('font-weight')}`;
    return `@font-face{${face};src:url(${await dataUrl(await font.blob())}) format("woff2")}`;
  });
  return (await Promise.all(written)).join('');
}

/** The drawing as a PNG of twice its size, sharp on paper, in the page's typeface. */
export async function pngOf(svg: string, scale = 2): Promise<Blob> {
  // A picture in the browser's own typeface is better than none.
  const faces = await typeface().catch(() => '');
  const drawing = svg.replace('</title>', `</title><style>${faces}</style>`);
  const url = URL.createObjectURL(new Blob([drawing], { type: 'image/svg+xml' }));
  try {
    const image = new Image();
    image.src = url;
    await image.decode();
    const canvas = document.createElement('canvas');
    canvas.width = Math.ceil(image.naturalWidth * scale);
    canvas.height = Math.ceil(image.naturalHeight * scale);
    const context = canvas.getContext('2d');
    if (!context) throw new Error('this browser draws no pictures');
    context.scale(scale, scale);
    context.drawImage(image, 0, 0);
    return await new Promise((resolve, reject) =>
      canvas.toBlob((blob) => (blob ? resolve(blob) : reject(new Error('the picture came out empty'))), 'image/png'),
    );
  } finally {
    URL.revokeObjectURL(url);
  }
}
