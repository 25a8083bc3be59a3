import type { FastifyInstance, FastifyRequest } from "fastify";
import { Type } from "typebox";
import { KeptSettingsSchema, ProblemSchema, type Settings, SettingsSchema } from "../../../core/messages/index.ts";
import type { GatewayParts } from "../gateway.ts";
import { RequestError } from "../problem.ts";

/**
 * How the person who is signed in has arranged their screens. Not a command to the engine: it is kept beside the person, not in the record,
 * and no judgement depends on it.
 */
export function settingsRoutes(app: FastifyInstance, { people, who }: GatewayParts): void {
  const own = ({ headers }: FastifyRequest): string => {
    const secret = who.session(headers);
    const person = secret === undefined ? undefined : people.ofSession(secret, Date.now());
    if (person) return person.name;
    const says = "Settings are kept for people who sign in; without a session of a person the browser keeps them.";
    throw new RequestError(409, "no-own-settings", says);
  };

  app.get(
    "/me/settings",
    { schema: { response: { 200: KeptSettingsSchema, 401: ProblemSchema, 409: ProblemSchema } } },
    (request) => {
      const kept = people.settings(own(request));
      return { settings: kept === undefined ? null : (JSON.parse(kept) as Settings) };
    },
  );

  app.put<{ Body: Settings }>(
    "/me/settings",
    {
      schema: {
        body: SettingsSchema,
        response: { 204: Type.Null(), 400: ProblemSchema, 401: ProblemSchema, 409: ProblemSchema },
      },
    },
    (request, reply) => {
      people.keepSettings(own(request), JSON.stringify(request.body));
      return reply.code(204).send();
    },
  );
}
