import { type AddressInfo, connect, createServer, type Socket } from "node:net";

/** A wire between browser and service that a test can cut, or let go dead without a word, and mend. */
export interface CuttableLink {
  url: string;
  /** every connection is broken and new ones are refused, as when a switch fails */
  cut: () => void;
  /** connections stay open, but nothing passes any more, as when a cable is pulled */
  deaden: () => void;
  mend: () => void;
  close: () => Promise<void>;
}

export async function cuttableLink(target: string): Promise<CuttableLink> {
  const { hostname, port } = new URL(target);
  const sockets = new Set<Socket>();
  let state: "whole" | "cut" | "dead" = "whole";
  const keep = (socket: Socket) => {
    sockets.add(socket);
    socket.on("close", () => sockets.delete(socket));
    socket.on("error", () => socket.destroy());
  };
  const drop = () => {
    for (const socket of sockets) socket.destroy();
  };
  const server = createServer((near) => {
    if (state === "cut") {
      near.destroy();
      return;
    }
    const far = connect(Number(port), hostname);
    keep(near);
    keep(far);
    near.on("data", (bytes) => state === "whole" && far.write(bytes));
    far.on("data", (bytes) => state === "whole" && near.write(bytes));
    near.on("close", () => far.destroy());
    far.on("close", () => near.destroy());
  });
  await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
  return {
    url: `http://127.0.0.1:${(server.address() as AddressInfo).port}`,
    cut() {
      state = "cut";
      drop();
    },
    deaden() {
      state = "dead";
    },
    mend() {
      if (state === "dead") drop();
      state = "whole";
    },
    close() {
      drop();
      return new Promise((resolve) => server.close(() => resolve()));
    },
  };
}
