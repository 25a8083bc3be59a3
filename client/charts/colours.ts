const names = [
  "page",
  "lane",
  "rule",
  "edge",
  "tone",
  "band",
  "fill",
  "ink",
  "quiet",
  "far",
  "odd",
  "sparse",
  "high",
  "medium",
  "low",
  "focus",
] as const;
export type Colours = Record<(typeof names)[number], string>;

/** The theme's colours as a canvas needs them. */
export function coloursAt(element: Element): Colours {
  const style = getComputedStyle(element);
  return Object.fromEntries(names.map((name) => [name, style.getPropertyValue(`--${name}`).trim()])) as Colours;
}

/** Calls back when the theme changes: a canvas does not restyle itself. */
export function onTheme(changed: () => void): () => void {
  const observer = new MutationObserver(changed);
  observer.observe(document.documentElement, { attributes: true, attributeFilter: ["data-theme"] });
  return () => observer.disconnect();
}
