import { basename } from "node:path";
import { fileURLToPath } from "node:url";

const above = fileURLToPath(new URL("..", import.meta.url));

/** Where the build is: tests run from the sources beside it, benches from within. */
export const dist = basename(above) === "dist" ? above : `${above}dist/`;
/** `millrace`, as built */
export const program = `${dist}server/main.js`;
