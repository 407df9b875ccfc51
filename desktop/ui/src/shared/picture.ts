import type { Attachment } from 'svelte/attachments';

/** Puts an SVG document into the page; script or handlers in it would stay dead, they are cut off. */
export const picture = (svg: string) => put(svg, 'svg');

/** The same for a formula in MathML. */
export const formula = (mathml: string) => put(mathml, 'math');

function put(text: string, root: 'svg' | 'math'): Attachment<HTMLElement> {
  return (holder) => {
    const parsed = new DOMParser().parseFromString(text, 'application/xml').documentElement;
    if (parsed.localName !== root) {
      holder.replaceChildren();
      return;
    }
    clean(parsed);
    holder.replaceChildren(document.importNode(parsed, true));
  };
}

function clean(root: Element): void {
  for (const element of [root, ...root.querySelectorAll('*')]) {
    if (['script', 'foreignObject', 'use', 'image', 'a'].includes(element.localName)) {
      element.remove();
      continue;
    }
    for (const { name } of [...element.attributes]) {
      if (name.startsWith('on') || name === 'style' || name.endsWith('href'))
        element.removeAttribute(name);
    }
  }
}
