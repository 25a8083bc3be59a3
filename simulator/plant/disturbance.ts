/** What is wrong with a line or its analyzer at one moment. Every field is 0 when nothing is; 1 is the stream's own usual size of it. */
export interface Disturbance {
  /** acetone, which no calibration knows */
  coSolvent: number;
  /** feed beyond the calibrated range: known ingredients, amounts outside */
  feed: number;
  /** 0 the usual grade, 1 the other one: inside the calibration */
  grade: number;
  /** resin on the probe's window */
  film: number;
  /** wear of the lamp: a bent baseline, and more noise */
  lamp: number;
  /** heat: the line warmer than any calibration sample */
  heat: number;
  /** share of the beam that goes through a bubble; 0–1 */
  bubble: number;
  /** share of washing liquid (propanol) in the line; 0–1 */
  wash: number;
}

export const undisturbed: Readonly<Disturbance> = Object.freeze({
  coSolvent: 0,
  feed: 0,
  grade: 0,
  film: 0,
  lamp: 0,
  heat: 0,
  bubble: 0,
  wash: 0,
});
