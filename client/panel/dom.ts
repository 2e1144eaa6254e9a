type Content = Node | string | null;

/** Attributes by name; false and null are left out, true stands for an empty one. */
type Attributes = Readonly<Record<string, string | number | boolean | null>>;

const SVG = 'http://www.w3.org/2000/svg';

function filled<E extends Element>(element: E, attributes: Attributes, content: readonly Content[]): E {
  for (const [name, value] of Object.entries(attributes)) {
    if (value !== null && value !== false) element.setAttribute(name, value === true ? '' : String(value));
  }
  // Text is only ever put in as text: what a file says is never read as markup.
  element.append(...content.filter((part) => part !== null));
  return element;
}

/** An HTML element. */
export function html<K extends keyof HTMLElementTagNameMap>(
  tag: K,
  attributes: Attributes = {},
  ...content: Content[]
): HTMLElementTagNameMap[K] {
  return filled(document.createElement(tag), attributes, content);
}

/** An SVG element. */
export function svg<K extends keyof SVGElementTagNameMap>(
  tag: K,
  attributes: Attributes = {},
  ...content: Content[]
): SVGElementTagNameMap[K] {
  return filled(document.createElementNS(SVG, tag), attributes, content);
}

/** A button that does something. */
export function button(text: string, act: () => void, attributes: Attributes = {}): HTMLButtonElement {
  const element = html('button', { type: 'button', ...attributes }, text);
  element.addEventListener('click', act);
  return element;
}
