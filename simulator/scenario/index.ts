export { builtInScenarios } from "./built-in.ts";
export { courseOf, disturbanceAt } from "./disturbance-at.ts";
export {
  type EventKind,
  eventKinds,
  isOfTheLine,
  kindOf,
  lagMs,
  type PlantEvent,
  settleMs,
  type TruthLabel,
} from "./event.ts";
export { historyEvents } from "./fortnight.ts";
export { type Grid, sequenceFrom, timeOf } from "./grid.ts";
export { type GrabSample, type LabSchedule, resultsOf, samplesReported, usualSchedule } from "./laboratory.ts";
export { parseScenario, ScenarioError } from "./parse-scenario.ts";
export { type ProcessState, processStateAt } from "./process-state.ts";
export { readingAt, type SimulatedReading } from "./reading-at.ts";
export { type Scenario, ScenarioSchema, scenarioEvents } from "./scenario.ts";
export { type Truth, truthOf } from "./truth.ts";
