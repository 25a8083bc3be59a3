import { type Static, Type } from "typebox";
import { StreamIdSchema } from "./reading.ts";

export const themes = ["system", "light", "dark"] as const;
export type ThemeChoice = (typeof themes)[number];

/** GET and PUT /api/v1/me/settings — how somebody has arranged their screens. Nothing here changes what is judged or recorded. */
export const SettingsSchema = Type.Object(
  {
    theme: Type.Enum(themes),
    /** the lanes of Watch from top to bottom; streams that are not named follow. Lanes of one group stand together. */
    lanes: Type.Array(Type.Object({ stream: StreamIdSchema, group: Type.String({ maxLength: 60 }) }), {
      maxItems: 400,
    }),
    /** by stream: the properties that are drawn, the first with its number written large */
    properties: Type.Record(Type.String(), Type.Array(Type.String({ maxLength: 200 }), { maxItems: 12 })),
  },
  { additionalProperties: false },
);
export type Settings = Static<typeof SettingsSchema>;

export const standardSettings: Settings = { theme: "system", lanes: [], properties: {} };

/** `settings` is null where nothing was kept yet. */
export const KeptSettingsSchema = Type.Object({ settings: Type.Union([SettingsSchema, Type.Null()]) });
export type KeptSettings = Static<typeof KeptSettingsSchema>;
