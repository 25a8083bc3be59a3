import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import { ProblemSchema } from "../../../core/messages/index.ts";
import { PersonSchema } from "../../people/person.ts";
import type { GatewayParts } from "../gateway.ts";
import { sessionCookie } from "../who.ts";

const SignInSchema = Type.Object({
  name: Type.String({ minLength: 1, maxLength: 200 }),
  password: Type.String({ minLength: 1, maxLength: 1000 }),
});
/** Signing in and out. */
export function peopleRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { config, people, who, engine, live, passwords } = parts;
  const secure = config.http.tls !== undefined || config.http.tlsByProxy === true;
  const cookie = { path: "/", httpOnly: true, sameSite: "strict", secure } as const;
  const record = (event: string, says: string, by: string) => engine.command({ kind: "record", event, says, by });

  app.get("/me", { schema: { response: { 200: PersonSchema, 401: ProblemSchema } } }, (request) =>
    parts.personOf(request),
  );

  app.post<{ Body: { name: string; password: string } }>(
    "/sign-in",
    { schema: { body: SignInSchema, response: { 200: PersonSchema, 401: ProblemSchema, 429: ProblemSchema } } },
    async (request, reply) => {
      const check = (name: string, password: string) => people.check(name, password);
      const person = await passwords.pass(request, request.body, { what: "sign-in", check });
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
