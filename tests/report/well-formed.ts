/** Why a piece of XML is not well-formed; null when it is. Elements, attributes and character references only, which is all that the charts use. */
export function xmlFault(text: string): string | null {
  const open: string[] = [];
  let at = 0;
  while (at < text.length) {
    const next = text.indexOf("<", at);
    const words = text.slice(at, next < 0 ? undefined : next);
    if (/&(?!(?:amp|lt|gt|quot|apos|#\d+|#x[\da-f]+);)/i.test(words)) return `a bare & in "${words.slice(0, 60)}"`;
    if (words.trim() !== "" && open.length === 0) return `text outside: "${words.slice(0, 60)}"`;
    if (next < 0) break;
    const tag = /^<(\/?)([A-Za-z][\w:.-]*)((?:\s+[A-Za-z_][\w:.-]*="[^"<]*")*)\s*(\/?)>/.exec(text.slice(next));
    if (tag === null) return `no tag at "${text.slice(next, next + 60)}"`;
    const [all, end, name, attributes, empty] = tag as unknown as [string, string, string, string, string];
    const names = [...attributes.matchAll(/\s([\w:.-]+)="/g)].map(([, key]) => key);
    if (new Set(names).size < names.length) return `an attribute twice in "${all}"`;
    if (/&(?!(?:amp|lt|gt|quot|apos|#\d+|#x[\da-f]+);)/i.test(attributes)) return `a bare & in "${all}"`;
    if (end) {
      if (open.pop() !== name) return `"${all}" closes another element`;
    } else if (!empty) open.push(name);
    at = next + all.length;
  }
  return open.length === 0 ? null : `<${open.at(-1)}> is not closed`;
}
