import { type Static, Type } from "typebox";

/** What a person may do; each role may all that those before it may. */
export const roles = ["viewer", "operator", "engineer", "administrator"] as const;
export const RoleSchema = Type.Enum(roles);
export type Role = (typeof roles)[number];

export const PersonSchema = Type.Object({ name: Type.String(), role: RoleSchema });
export type Person = Static<typeof PersonSchema>;

export function mayAct(person: Person, needed: Role): boolean {
  return roles.indexOf(person.role) >= roles.indexOf(needed);
}
