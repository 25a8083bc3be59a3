import { once } from "node:events";
import { createServer, type Server } from "node:net";
import { Aedes } from "aedes";

export interface Heard {
  topic: string;
  payload: Buffer;
  qos: number;
  retain: boolean;
}

/** A real broker on the loopback, that remembers what clients published. Port 0: any free one. */
export async function loopbackBroker(port = 0) {
  const aedes = await Aedes.createBroker();
  const server: Server = createServer(aedes.handle);
  server.listen(port, "127.0.0.1");
  await once(server, "listening");
  const heard: Heard[] = [];
  aedes.on("publish", (packet, client) => {
    if (client) heard.push({ ...packet, payload: packet.payload as Buffer });
  });
  const { port: given } = server.address() as { port: number };
  return {
    heard,
    port: given,
    url: `mqtt://127.0.0.1:${given}`,
    aedes,
    readings: () => heard.filter(({ topic }) => topic.endsWith("/reading")),
    async close() {
      const closed = once(server, "close");
      server.close();
      await new Promise<void>((resolve) => aedes.close(resolve));
      await closed;
    },
  };
}
