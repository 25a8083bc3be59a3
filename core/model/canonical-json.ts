/**
 * JSON with the keys of every object sorted and no white space: equal values give equal text. Follows RFC 8785 for what a model or limit
 * set may hold: keys by UTF-16 code unit, numbers as ECMAScript writes them, keys without a value left out.
 *
 * @throws TypeError for a number that is not finite and for what JSON has no word for: it has no canonical form.
 */
export function canonicalJson(value: unknown): string {
  if (value === null || typeof value === "boolean" || typeof value === "string") return JSON.stringify(value);
  if (typeof value === "number") {
    if (!Number.isFinite(value)) throw new TypeError(`${value} has no place in JSON`);
    return JSON.stringify(value);
  }
  if (Array.isArray(value)) return `[${value.map(canonicalJson).join(",")}]`;
  if (typeof value !== "object") throw new TypeError(`a ${typeof value} has no place in JSON`);
  const entries = Object.entries(value).filter(([, part]) => part !== undefined);
  entries.sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
  return `{${entries.map(([key, part]) => `${JSON.stringify(key)}:${canonicalJson(part)}`).join(",")}}`;
}
