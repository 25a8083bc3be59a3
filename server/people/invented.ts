import type { Person } from "./person.ts";

/** The people of the invented plant who sign its shifts. Their passwords are no secret: they are printed at the start and on the screen. */
export const inventedPeople: readonly (Person & { password: string })[] = [
  { name: "R. Quill", role: "operator", password: "quill-hands-over" },
  { name: "T. Marsh", role: "operator", password: "marsh-takes-over" },
];

export function inventedPerson(name: string, password: string): Person | undefined {
  const found = inventedPeople.find((person) => person.name === name && person.password === password);
  return found && { name: found.name, role: found.role };
}
