/** What of a picture's look comes from style sheets, and has to be written into it where it leaves the panel. */
const PROPERTIES = [
  'fill',
  'fill-opacity',
  'stroke',
  'stroke-width',
  'stroke-dasharray',
  'stroke-opacity',
  'opacity',
  'font-family',
  'font-size',
  'font-weight',
] as const;

/** A drawing of the panel as a file of its own, on the present background. */
export function standaloneSvg(picture: SVGSVGElement): string {
  const copy = picture.cloneNode(true) as SVGSVGElement;
  const originals = [picture, ...picture.querySelectorAll('*')];
  for (const [k, element] of [copy, ...copy.querySelectorAll('*')].entries()) {
    const style = getComputedStyle(originals[k]!);
    for (const name of PROPERTIES) element.setAttribute(name, style.getPropertyValue(name));
    element.removeAttribute('class');
    element.removeAttribute('tabindex');
  }
  const { width, height } = picture.viewBox.baseVal;
  copy.setAttribute('xmlns', 'http://www.w3.org/2000/svg');
  copy.setAttribute('width', String(width));
  copy.setAttribute('height', String(height));
  const background = document.createElementNS('http://www.w3.org/2000/svg', 'rect');
  background.setAttribute('width', String(width));
  background.setAttribute('height', String(height));
  background.setAttribute('fill', getComputedStyle(document.body).backgroundColor);
  copy.prepend(background);
  return `${new XMLSerializer().serializeToString(copy)}\n`;
}
