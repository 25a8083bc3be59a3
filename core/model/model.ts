import { type Static, Type } from "typebox";
import { AxisSpecSchema } from "../messages/index.ts";
import { FittedStepSchema } from "../spectrum/index.ts";

const numbers = Type.Array(Type.Number());
const matrix = Type.Array(numbers);
const strict = { additionalProperties: false };

export const ModelPropertySchema = Type.Object(
  {
    name: Type.String({ minLength: 1, maxLength: 100 }),
    unit: Type.String({ maxLength: 40 }),
    /** smallest and largest reference value of the calibration */
    range: Type.Tuple([Type.Number(), Type.Number()]),
    /** ŷ = mean + deviation · (t qᵀ); deviation is 1 where y was not scaled */
    mean: Type.Number(),
    deviation: Type.Number({ exclusiveMinimum: 0 }),
    /** √(Σe²/n) over the calibration samples, unit of the property */
    rmsec: Type.Optional(Type.Number({ minimum: 0 })),
    /** √(Σe²/(n − A − 1)), the standard error of calibration of ASTM E1655 */
    sec: Type.Optional(Type.Number({ minimum: 0 })),
    /** √(PRESS/n) by number of components, from 0; every step refitted in every fold */
    rmsecv: Type.Optional(numbers),
    /** √(Σe²/n) over samples that were not used to calibrate */
    rmsep: Type.Optional(Type.Number({ minimum: 0 })),
  },
  strict,
);
export type ModelProperty = Static<typeof ModelPropertySchema>;

/** Residuals of samples against the model: Q, and the eigenvalues of their covariance E'E/(n − 1), largest first, without zeros. */
const ResidualsSchema = Type.Object({ q: numbers, eigenvalues: numbers }, strict);

/**
 * A calibration model, as its file holds it. Matrices are lists of lists: by component (then by channel or property) for `weights`,
 * `loadings`, `yLoadings`; by sample (then by component or property) for what belongs to samples. Channels are those after the steps.
 *
 * A model that was brought in from elsewhere may lack what its maker did not hand over. It has either weights, loadings and yLoadings, or
 * coefficients alone; without `scores` T², leverage and the nearest sample cannot be judged, without `residuals` Q has no limit.
 */
export const ModelSchema = Type.Object(
  {
    format: Type.Literal("millrace-model"),
    formatVersion: Type.Literal(1),
    name: Type.String({ minLength: 1, maxLength: 200 }),
    /** RFC 3339 */
    created: Type.String({ pattern: "^\\d{4}-\\d\\d-\\d\\dT\\d\\d:\\d\\d:\\d\\d(\\.\\d+)?(Z|[+-]\\d\\d:\\d\\d)$" }),
    origin: Type.Union([Type.Literal("calibrated"), Type.Literal("imported")]),
    notes: Type.String({ maxLength: 100_000 }),
    /** of the spectra as they are measured, before any step */
    axis: AxisSpecSchema,
    steps: Type.Array(FittedStepSchema, { maxItems: 50 }),
    properties: Type.Array(ModelPropertySchema, { minItems: 1, maxItems: 100 }),
    /** A, the number of components; 0 for coefficients alone */
    components: Type.Integer({ minimum: 0, maximum: 1000 }),
    /** W: A × channels, each of unit length */
    weights: Type.Optional(matrix),
    /** P: A × channels */
    loadings: Type.Optional(matrix),
    /** Q: A × properties, in units of the scaled y */
    yLoadings: Type.Optional(matrix),
    /** properties × channels, per unit of the property (not of the scaled y); only where there are no weights */
    coefficients: Type.Optional(matrix),
    samples: Type.Object(
      {
        names: Type.Array(Type.String()),
        /** taken out by a person before the fit, never by the program */
        excluded: Type.Array(Type.Object({ name: Type.String(), reason: Type.Optional(Type.String()) }, strict)),
        /** y: samples × properties */
        reference: Type.Optional(matrix),
      },
      strict,
    ),
    /** T: samples × A */
    scores: Type.Optional(matrix),
    /** U: samples × A, u = Y q / qᵀq of the Y that is left before the component */
    yScores: Type.Optional(matrix),
    residuals: Type.Optional(
      Type.Object(
        {
          fit: ResidualsSchema,
          /** of each sample against the model that was fitted without it, with that model's own T² */
          crossValidated: Type.Optional(Type.Object({ ...ResidualsSchema.properties, t2: numbers }, strict)),
        },
        strict,
      ),
    ),
    crossValidation: Type.Optional(
      Type.Object(
        {
          /** in words, as `--validate` takes it */
          method: Type.String(),
          segments: Type.Integer({ minimum: 2 }),
          /** ŷ of each sample by the model fitted without it, at the chosen number of components: samples × properties */
          predicted: matrix,
        },
        strict,
      ),
    ),
    /** the raw calibration spectra, channel by channel on `axis` */
    band: Type.Optional(Type.Object({ mean: numbers, low: numbers, high: numbers }, strict)),
  },
  { ...strict, title: "Millrace model file" },
);
export type Model = Static<typeof ModelSchema>;
