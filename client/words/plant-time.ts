export { type PlantTime, plantTime } from "../../core/words/index.ts";
