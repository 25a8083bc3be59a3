import { describe, expect, test } from "vitest";
import {
  canonicalJson,
  checkModel,
  type Model,
  ModelFileError,
  modelId,
  parseModel,
} from "../../../core/model/index.ts";
import { smallModel } from "./small-model.ts";

const read = (model: unknown) => parseModel(JSON.stringify(model), "bq.model.json");

describe("a model file", () => {
  test("comes back as it was written, and is known by its content, not by spaces or the order of keys", () => {
    const model = smallModel();
    expect(read(model)).toEqual(model);
    const turned = Object.fromEntries(Object.entries(model).reverse());
    const id = modelId(model);
    expect(id).toMatch(/^[0-9a-f]{64}$/);
    expect(modelId(parseModel(JSON.stringify(turned, null, 2), "x"))).toBe(id);
    expect(modelId({ ...model, notes: "changed" })).not.toBe(id);
  });

  test("that is no JSON, or none of ours, says so", () => {
    expect(() => parseModel("{", "a.json")).toThrow(/^a\.json: the file is no JSON/);
    expect(() => read({ format: "something" })).toThrow(/bq\.model\.json: /);
    expect(() => read([])).toThrow(ModelFileError);
    expect(() => read(null)).toThrow(ModelFileError);
  });
});

describe("a damaged model file is refused, and the field named", () => {
  type Damage = (model: Model & Record<string, unknown>) => unknown;
  const damages: [string, Damage, RegExp][] = [
    ["format", (m) => Object.assign(m, { format: "other" }), /format/],
    ["formatVersion", (m) => Object.assign(m, { formatVersion: 2 }), /formatVersion/],
    ["an unknown field", (m) => Object.assign(m, { extra: 1 }), /expected/],
    ["no name", (m) => Object.assign(m, { name: undefined }), /name is missing/],
    [
      "a loading that is short",
      (m) => m.loadings!.splice(1, 1, m.loadings![1].slice(1)),
      /loadings\[1\] is 20 values, expected 21 \(one for each channel after the steps, 1000–2200 nm, 21 points\)/,
    ],
    [
      "a weight too many",
      (m) => m.weights!.push(m.weights![0]),
      /weights is 3 rows, expected 2 \(one for each component\)/,
    ],
    [
      "a y-loading too wide",
      (m) => m.yLoadings![0].push(1),
      /yLoadings\[0\] is 2 values, expected 1 \(one for each property\)/,
    ],
    [
      "scores of fewer samples",
      (m) => m.scores!.pop(),
      /scores is 11 rows, expected 12 \(one for each name in samples\.names\)/,
    ],
    ["y-scores too narrow", (m) => m.yScores![3].pop(), /yScores\[3\] is 1 values, expected 2/],
    ["residuals of fewer samples", (m) => m.residuals!.fit.q.pop(), /residuals\.fit\.q is 11 values, expected 12/],
    [
      "cross-validated T² of fewer samples",
      (m) => m.residuals!.crossValidated!.t2.pop(),
      /residuals\.crossValidated\.t2 is 11/,
    ],
    ["a prediction too many", (m) => m.crossValidation!.predicted[0].push(1), /crossValidation\.predicted\[0\] is 2/],
    [
      "a band off the axis",
      (m) => m.band!.low.pop(),
      /band\.low is 20 values, expected 21 \(one for each point of the axis/,
    ],
    [
      "a centre off the axis",
      (m) => (m.steps[1] as { mean: number[] }).mean.pop(),
      /steps is wrong: center: the mean is 20 values, expected 21/,
    ],
    ["an unknown step", (m) => m.steps.push({ step: "magic" } as never), /steps/],
    ["a word for a number", (m) => Object.assign(m.loadings![0], { 3: "x" }), /loadings\[0\]\[3\] is "x"/],
    ["null for a number", (m) => Object.assign(m.loadings![0], { 3: null }), /loadings\[0\]\[3\] is null/],
    ["a falling range", (m) => m.properties[0].range.reverse(), /properties\[0\]\.range is/],
    [
      "two properties of one name",
      (m) => m.properties.push(m.properties[0]),
      /properties\[1\]\.name is "first", as properties\[0\]|expected 2 \(one for each property\)/,
    ],
    ["no components", (m) => Object.assign(m, { components: 0 }), /components is 0, expected at least 1/],
    [
      "weights missing",
      (m) => Object.assign(m, { weights: undefined }),
      /weights is missing, expected weights, loadings and yLoadings/,
    ],
    [
      "coefficients beside weights",
      (m) => Object.assign(m, { coefficients: [[1]] }),
      /coefficients is given beside weights/,
    ],
    [
      "an axis that turns",
      (m) => Object.assign(m, { axis: { unit: "nm", points: [3, 2, 5] } }),
      /axis is wrong: axis point 3/,
    ],
    ["a date that is none", (m) => Object.assign(m, { created: "yesterday" }), /created/],
  ];
  test.each(damages)("%s", (_, damage, says) => {
    const model = smallModel() as Model & Record<string, unknown>;
    damage(model);
    expect(() => read(model)).toThrow(ModelFileError);
    expect(() => read(model)).toThrow(says);
  });

  test("a number without end, which JSON can write", () => {
    const text = JSON.stringify(smallModel()).replace(/"loadings":\[\[[^,]+,/, '"loadings":[[1e999,');
    expect(() => parseModel(text, "x")).toThrow(/loadings\[0\]\[0\]/);
  });
});

test("a model that a program made, not a file, may hold NaN: it is found", () => {
  const model = smallModel();
  model.scores![4][1] = Number.NaN;
  expect(() => checkModel(model, "x")).toThrow(/^x: scores\[4\]\[1\] is NaN, expected a finite number/);
});

describe("canonical JSON", () => {
  test("sorts keys at every depth, leaves out what has no value, and writes numbers as ECMAScript does", () => {
    expect(canonicalJson({ b: [1, { d: 1e21, c: -0 }], a: "ü\n", e: undefined, "": null })).toBe(
      '{"":null,"a":"ü\\n","b":[1,{"c":0,"d":1e+21}]}',
    );
  });

  test("has no form for what JSON cannot hold", () => {
    expect(() => canonicalJson({ a: Number.NaN })).toThrow(TypeError);
    expect(() => canonicalJson([undefined])).toThrow(TypeError);
    expect(() => canonicalJson(() => 1)).toThrow(TypeError);
  });
});
