/** One message as it came from the broker, still unread. */
export interface Message {
  topic: string;
  payload: Uint8Array;
  /** wall clock when it was durably ours to answer for, epoch ms */
  receivedAt: number;
}

/** Messages that are handled and acknowledged together. */
export interface MessageBatch {
  messages: Message[];
  /** Only to be called when what came of the messages is durable: now the broker may forget them. */
  acknowledge(): void;
}

/** Where readings come from: the embedded broker's inbox, or a subscription at an external broker. */
export interface Source {
  /** At most `most` messages that are there now (fewer, where they are large), in their order; taken again from the start when they are not acknowledged. */
  take(most: number): MessageBatch | undefined;
  /** How many wait, and when the oldest of them came. */
  waiting(): { count: number; oldest: number | undefined };
  /** Is the broker reached? */
  connected(): boolean;
  close(): Promise<void>;
}
