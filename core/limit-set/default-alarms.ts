import type { AlarmRule } from "./limit-set.ts";

const threeInARow = { readings: 3 };

/**
 * The alarms of a stream about which nobody has said anything yet: none on its properties (only the site knows those limits), but those
 * that watch whether the numbers may be believed at all.
 *
 * On- and off-delays of three readings: engineering judgement, not a standard; one bubble or one bad scan must not alarm.
 */
export function defaultAlarms(): AlarmRule[] {
  return [
    {
      key: "unfamiliar",
      title: "Unfamiliar spectrum",
      watches: { kind: "unfamiliar", deadband: 0.05 },
      onDelay: threeInARow,
      offDelay: threeInARow,
      priority: "medium",
      untrusted: "evaluate",
      purpose: {
        cause: "Something is in the stream, or on the probe, that the calibration never saw.",
        consequence: "The predicted values cannot be relied upon.",
        response: "Take a sample. Go by the last trusted value until the laboratory or the analyzer is clear.",
        timeToRespondMinutes: 30,
      },
    },
    {
      key: "extrapolated",
      title: "Outside the calibrated range",
      watches: { kind: "extrapolated", deadband: 0.05 },
      onDelay: threeInARow,
      offDelay: threeInARow,
      priority: "low",
      untrusted: "evaluate",
      purpose: {
        cause: "Known ingredients, in amounts that the calibration does not cover.",
        consequence: "The predicted values show a direction, not an amount.",
        response: "Check the feed. Take a sample if the stream stays there, so that the calibration can grow.",
        timeToRespondMinutes: 60,
      },
    },
    {
      key: "silent",
      title: "No readings",
      watches: { kind: "silent", periods: 6 },
      onDelay: { readings: 1 },
      offDelay: { readings: 1 },
      priority: "medium",
      untrusted: "evaluate",
      purpose: {
        cause: "The analyzer, its link or the message broker has stopped.",
        consequence: "The values on the screen are old.",
        response: "Check the analyzer and its link. Run the stream by laboratory samples until it is back.",
        timeToRespondMinutes: 15,
      },
    },
    {
      key: "frozen",
      title: "The same spectrum again and again",
      watches: { kind: "frozen" },
      onDelay: { readings: 1 },
      offDelay: threeInARow,
      priority: "medium",
      untrusted: "evaluate",
      purpose: {
        cause: "The analyzer repeats its last spectrum; a live one always carries fresh noise.",
        consequence: "The value stands still while the process moves.",
        response: "Restart the acquisition on the analyzer. Do not go by the value until it moves again.",
        timeToRespondMinutes: 15,
      },
    },
    {
      key: "unusable",
      title: "Many unusable spectra",
      watches: { kind: "unusable share", share: 0.3, among: 10 },
      onDelay: { readings: 2 },
      offDelay: threeInARow,
      priority: "low",
      untrusted: "evaluate",
      purpose: {
        cause: "Bubbles, a blocked sample line, a failing lamp or detector.",
        consequence: "Few readings are left to go by.",
        response: "Look at the sample flow first, then at the lamp and the probe window.",
        timeToRespondMinutes: 60,
      },
    },
  ];
}
