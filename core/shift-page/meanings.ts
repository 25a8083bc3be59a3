import type { SigningSide } from "../messages/index.ts";

/** What each signature means, as it stands under it on the screen and on paper. */
export const meanings: Record<SigningSide, string> = {
  outgoing: "I hand over this shift. The record says what I know to be done, open and out of the ordinary.",
  incoming: "I have read this record, asked what was unclear, and take over the shift.",
};
