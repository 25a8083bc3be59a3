export { type CsvCell, csvOf } from "./csv.ts";
export { duration, period } from "./duration.ts";
export { type PlantTime, plantTime } from "./plant-time.ts";
export {
  axisUnit,
  counted,
  decimalsFor,
  decimalsOfStep,
  figure,
  fixed,
  grouped,
  named,
  percent,
  ratio,
  thin,
  withUncertainty,
  withUnit,
} from "./quantity.ts";
