/** A part of the site file and the line on which it starts. */
export interface Part {
  name: string;
  line: number;
}

/** The outermost keys of a text that may not be whole JSON yet: those one bracket deep, outside of texts. */
export function outline(text: string): Part[] {
  const parts: Part[] = [];
  let depth = 0;
  let line = 1;
  for (const token of text.matchAll(/"(?:[^"\\\n]|\\.)*"(\s*:)?|[{}[\]\n]/g)) {
    const [found, colon] = token;
    if (found === '\n') line += 1;
    else if (found === '{' || found === '[') depth += 1;
    else if (found === '}' || found === ']') depth -= 1;
    else if (colon !== undefined && depth === 1) {
      parts.push({ name: found.slice(1, found.lastIndexOf('"')), line });
    }
  }
  return parts;
}
