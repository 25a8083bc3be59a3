import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import { calendarDays, shiftCalendar } from "../../../core/handover/index.ts";
import { type Shift, ShiftsSchema } from "../../../core/messages/index.ts";
import type { GatewayParts } from "../gateway.ts";

/** The years that a time may lie in: those for which zones are known to any use. */
const earliest = Date.UTC(1970, 0, 2);
const latest = Date.UTC(2200, 0, 1);

export const AroundSchema = Type.Integer({ minimum: earliest, maximum: latest });

const Query = Type.Object({
  around: Type.Optional(AroundSchema),
  before: Type.Integer({ minimum: 0, maximum: 100, default: 1 }),
  after: Type.Integer({ minimum: 0, maximum: 100, default: 1 }),
});

/** The plant's shifts about a moment (epoch ms; now, without one). */
export function shiftRoutes(app: FastifyInstance, { config }: GatewayParts): void {
  const calendar = shiftCalendar(config.shifts ?? calendarDays, config.timeZone);

  app.get<{ Querystring: { around?: number; before: number; after: number } }>(
    "/shifts",
    { schema: { querystring: Query, response: { 200: ShiftsSchema } } },
    ({ query: { around = Date.now(), before, after } }) => {
      const current = calendar.at(around);
      return {
        before: following(current, before, calendar.before).reverse(),
        current,
        after: following(current, after, calendar.after),
      };
    },
  );
}

/** The next so many, one after the other. */
export function following(shift: Shift, count: number, next: (shift: Shift) => Shift): Shift[] {
  const found: Shift[] = [];
  for (let last = shift; found.length < count; found.push(last)) last = next(last);
  return found;
}
