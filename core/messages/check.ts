import type { Static, TSchema } from "typebox";
import { Compile } from "typebox/compile";

/** Where a value from outside first departs from its schema, in words. */
export interface SchemaMismatch {
  /** dotted path, "" for the whole: `alarms[2].watches.limit` */
  field: string;
  got: string;
  expected: string;
}

export interface Checker<T> {
  is(value: unknown): value is T;
  /** undefined when the value fits */
  mismatch(value: unknown): SchemaMismatch | undefined;
}

/** Compiles a schema once; the border files keep the result. */
export function checker<S extends TSchema>(schema: S): Checker<Static<S>> {
  const compiled = Compile(schema);
  return {
    is: (value): value is Static<S> => compiled.Check(value),
    mismatch(value) {
      if (compiled.Check(value)) return undefined;
      const errors = compiled.Errors(value);
      // The deepest path says most: a union reports every branch that did not fit, and the whole last.
      const worst = errors.reduce((a, b) => (depth(b.instancePath) > depth(a.instancePath) ? b : a));
      const missing = worst.keyword === "required" ? `/${worst.params.requiredProperties[0]}` : "";
      const path = worst.instancePath + missing;
      return {
        field: dotted(path),
        got: missing ? "missing" : shown(at(value, path)),
        expected: worst.message,
      };
    },
  };
}

function depth(path: string): number {
  return path.split("/").length;
}

function dotted(path: string): string {
  return path
    .split("/")
    .slice(1)
    .map((part) => part.replaceAll("~1", "/").replaceAll("~0", "~"))
    .map((part, i) => (/^\d+$/.test(part) ? `[${part}]` : i === 0 ? part : `.${part}`))
    .join("");
}

function at(value: unknown, path: string): unknown {
  let here = value;
  for (const part of path.split("/").slice(1)) {
    const key = part.replaceAll("~1", "/").replaceAll("~0", "~");
    here = typeof here === "object" && here !== null ? (here as Record<string, unknown>)[key] : undefined;
  }
  return here;
}

/** A value in few words, for a sentence: long ones are cut. */
export function shown(value: unknown): string {
  if (value === undefined) return "missing";
  if (typeof value === "string") return `"${value.length > 60 ? `${value.slice(0, 57)}…` : value}"`;
  if (typeof value === "number" || typeof value === "boolean" || value === null) return String(value);
  if (Array.isArray(value)) return `a list of ${value.length}`;
  return `a ${typeof value}`;
}
