export { duration, period } from "../../core/words/index.ts";
