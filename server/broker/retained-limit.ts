/** Topics with a retained message, and how large one may be: an analyzer's state and a few more for each of a thousand streams. */
const mostTopics = 4000;
const mostBytes = 64 * 1024;

/** Keeps count of the broker's retained messages, which stand in memory for ever: may one more be kept? */
export class RetainedLimit {
  readonly #topics = new Set<string>();

  /** An empty message takes its topic's away (MQTT 3.1.1 §3.3.1.3). */
  mayKeep(topic: string, bytes: number): boolean {
    if (bytes === 0) {
      this.#topics.delete(topic);
      return true;
    }
    if (bytes > mostBytes) return false;
    if (!this.#topics.has(topic) && this.#topics.size >= mostTopics) return false;
    this.#topics.add(topic);
    return true;
  }
}
