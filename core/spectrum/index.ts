export { type Axis, AxisError, axisFromSpec, describeAxis, evenSpacing, sameAxis, specOfAxis } from "./axis.ts";
export { compileSteps } from "./compile-steps.ts";
export { applySteps, axisAfterSteps, fitSteps } from "./fit-steps.ts";
export { parseSteps, writeSteps } from "./parse-steps.ts";
export { resampler } from "./resample.ts";
export {
  type Apply,
  type FittedStep,
  FittedStepSchema,
  type Spectra,
  type Step,
  StepError,
} from "./step.ts";
export { checkStepOrder } from "./step-order.ts";
export { savitzkyGolayWeights } from "./steps/savitzky-golay.ts";
export {
  parseHeader,
  parseRow,
  parseTable,
  splitLine,
  type Table,
  TableError,
  type TableHeader,
  type TableRow,
} from "./table.ts";
