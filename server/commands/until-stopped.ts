/**
 * Runs something until the process is asked to end (Ctrl-C, SIGTERM) or it fails by itself, then stops it in order. A second Ctrl-C does not
 * wait any more.
 *
 * @param start starts it and returns what stops it; may call `stopWith` when it cannot go on
 */
export async function untilStopped(
  start: (stopWith: (error: Error) => void) => Promise<() => Promise<void>>,
): Promise<void> {
  let stopWith: (error?: Error) => void = () => {};
  const asked = new Promise<Error | undefined>((resolve) => {
    stopWith = resolve;
  });
  let signals = 0;
  const onSignal = () => {
    if (++signals > 1) process.exit(1);
    stopWith();
  };
  process.on("SIGINT", onSignal);
  process.on("SIGTERM", onSignal);
  const stop = await start((error) => stopWith(error));
  const error = await asked;
  if (!error) console.error("stopping …");
  await stop();
  process.off("SIGINT", onSignal);
  process.off("SIGTERM", onSignal);
  if (error) throw error;
  console.error("stopped; everything that was acknowledged is on record");
}
