/** The spectrum under way: its values are (x − alpha) · beta. */
export interface State {
  x: Float64Array;
  alpha: number;
  beta: number;
}

/** One pass over the spectrum under way; writes only into memory of its own. */
export type Walk = (state: State) => void;
