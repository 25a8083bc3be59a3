export {
  type AlarmHistory,
  type Annunciation,
  alarmHistory,
  type NamedAlarm,
  type Stretch,
} from "./annunciation.ts";
export { type Flood, floodBeginsAbove, floodEndsBelow, floodsIn, mostWithin } from "./floods.ts";
export { byAlarm, type Chattering, chatteringOf, type Fleeting, fleetingOf } from "./nuisance.ts";
export { performanceOf } from "./performance.ts";
export { recommendations, recommendedShares } from "./recommended.ts";
