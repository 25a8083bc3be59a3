import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import { ProblemSchema } from "../../../core/messages/index.ts";
import { PersonSchema } from "../../people/person.ts";
import { afterFailure, type Failures, waitLeft } from "../../people/throttle.ts";
import type { GatewayParts } from "../gateway.ts";
import { RequestError } from "../problem.ts";
import { sessionCookie } from "../who.ts";

const SignInSchema = Type.Object({
  name: Type.String({ minLength: 1, maxLength: 200 }),
  password: Type.String({ minLength: 1, maxLength: 1000 }),
});
/** Names and addresses whose failures are remembered: a guesser with many names must not fill the memory. */
const mostRemembered = 10_000;

/** Signing in and out. */
export function peopleRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { config, people, who, engine, live } = parts;
  const failures = new Map<string, Failures>();
  const secure = config.http.tls !== undefined || config.http.tlsByProxy === true;
  const cookie = { path: "/", httpOnly: true, sameSite: "strict", secure } as const;
  const record = (kind: string, says: string, by?: string) =>
    engine.command({ kind: "record", event: kind, says, ...(by === undefined ? {} : { by }) });

  app.get("/me", { schema: { response: { 200: PersonSchema, 401: ProblemSchema } } }, (request) =>
    parts.personOf(request),
  );

  app.post<{ Body: { name: string; password: string } }>(
    "/sign-in",
    { schema: { body: SignInSchema, response: { 200: PersonSchema, 401: ProblemSchema, 429: ProblemSchema } } },
    async (request, reply) => {
      const { name, password } = request.body;
      const key = `${request.ip} ${name}`;
      const wait = waitLeft(failures.get(key), Date.now());
      if (wait > 0) {
        const says = `Too many failed sign-ins. Wait ${Math.ceil(wait / 1000)} s, then try again.`;
        throw new RequestError(429, "wait", says);
      }
      const person = await people.check(name, password);
      if (!person) {
        if (failures.size >= mostRemembered) failures.delete(failures.keys().next().value!);
        failures.set(key, afterFailure(failures.get(key), Date.now()));
        await record("sign-in refused", `A sign-in as "${name.slice(0, 60)}" from ${request.ip} failed.`);
        throw new RequestError(401, "wrong-name-or-password", "This name and password do not belong together.");
      }
      failures.delete(key);
      const { secret, expires } = people.openSession(person.name, Date.now());
      await record("signed in", `${person.name} (${person.role}) signed in.`, person.name);
      reply.setCookie(sessionCookie, secret, { ...cookie, expires: new Date(expires) });
      return person;
    },
  );

  app.post("/sign-out", { schema: { response: { 204: Type.Null() } } }, async (request, reply) => {
    const secret = who.session(request.headers);
    if (secret !== undefined) {
      const person = people.ofSession(secret, Date.now());
      people.closeSession(secret);
      live.dropUnwelcome();
      if (person) await record("signed out", `${person.name} signed out.`, person.name);
    }
    return reply.clearCookie(sessionCookie, cookie).code(204).send();
  });
}
