export { conditionOf, isUpper, type Surroundings } from "./condition.ts";
export {
  afterGap,
  type Condition,
  type DetectorState,
  detect,
  restingDetector,
  type Signal,
} from "./detector.ts";
export {
  type Beyond,
  excursionFrom,
  excursionOf,
  extend,
  type OpenExcursion,
} from "./excursion.ts";
export {
  type AlarmEvent,
  type AlarmRecord,
  type AlarmState,
  advance,
  stateWord,
} from "./lifecycle.ts";
