import { createHash, randomBytes } from "node:crypto";
import Database from "better-sqlite3";
import { MillraceError } from "../../core/errors.ts";
import { hashPassword, isPassword, type PasswordHash, shortestPassword } from "./password.ts";
import { type Person, type Role, roles } from "./person.ts";

export class PeopleError extends MillraceError {
  readonly code = "people";
}

const schema = `
CREATE TABLE IF NOT EXISTS person (name TEXT PRIMARY KEY, role TEXT NOT NULL, salt BLOB NOT NULL, hash BLOB NOT NULL, active INTEGER NOT NULL) STRICT;
CREATE TABLE IF NOT EXISTS session (id BLOB PRIMARY KEY, name TEXT NOT NULL REFERENCES person ON DELETE CASCADE, expires INTEGER NOT NULL) STRICT, WITHOUT ROWID;
CREATE TABLE IF NOT EXISTS token (id BLOB PRIMARY KEY, label TEXT NOT NULL UNIQUE, role TEXT NOT NULL, expires INTEGER NOT NULL) STRICT, WITHOUT ROWID;
CREATE TABLE IF NOT EXISTS setting (name TEXT PRIMARY KEY REFERENCES person ON DELETE CASCADE, value TEXT NOT NULL) STRICT;
`;

/** A shift and its handover: nobody signs in twice in a shift, and nobody's session outlives the next. */
const sessionMs = 14 * 3600_000;

interface PersonRow extends PasswordHash {
  name: string;
  role: Role;
  active: number;
}

/**
 * Who may sign in. Passwords are kept as scrypt hashes, sessions and tokens as SHA-256 of their secret: nothing in the file opens a door.
 * Names are kept for ever (the record speaks of them); a person who left is made inactive.
 */
export class PeopleStore {
  readonly #db: Database.Database;

  constructor(file: string) {
    this.#db = new Database(file, { timeout: 5000 });
    this.#db.pragma("journal_mode = WAL");
    this.#db.pragma("synchronous = FULL");
    this.#db.pragma("foreign_keys = ON");
    this.#db.exec(schema);
  }

  /** Was nobody ever added? From the first person on somebody must sign in, also when all have left. */
  isEmpty(): boolean {
    return this.#db.prepare("SELECT 1 FROM person LIMIT 1").get() === undefined;
  }

  list(): (Person & { active: boolean })[] {
    return this.#db
      .prepare<[], PersonRow>("SELECT * FROM person ORDER BY name")
      .all()
      .map(({ name, role, active }) => ({ name, role, active: active === 1 }));
  }

  /** @throws PeopleError for a name that is taken or a password that is too short */
  async add(name: string, role: Role, password: string): Promise<void> {
    checkRole(role);
    if (name.trim() !== name || name === "")
      throw new PeopleError(`name is "${name}", expected one without spaces around it.`);
    if (this.#row(name)) throw new PeopleError(`${name} is known already; change the role or the password instead.`);
    const { salt, hash } = await hashed(password);
    this.#db.prepare("INSERT INTO person VALUES (?, ?, ?, ?, 1)").run(name, role, salt, hash);
  }

  async setPassword(name: string, password: string): Promise<void> {
    const { salt, hash } = await hashed(password);
    this.#change(name, "UPDATE person SET salt = ?, hash = ? WHERE name = ?", salt, hash);
    this.signOutEverywhere(name);
  }

  setRole(name: string, role: Role): void {
    checkRole(role);
    this.#change(name, "UPDATE person SET role = ? WHERE name = ?", role);
  }

  setActive(name: string, active: boolean): void {
    this.#change(name, "UPDATE person SET active = ? WHERE name = ?", active ? 1 : 0);
    if (!active) this.signOutEverywhere(name);
  }

  signOutEverywhere(name: string): void {
    this.#db.prepare("DELETE FROM session WHERE name = ?").run(name);
  }

  /** The person whose password it is; undefined when it is not, whether or not there is such a person (both take the same time). */
  async check(name: string, password: string): Promise<Person | undefined> {
    const row = this.#row(name);
    const fits = await isPassword(password, row ?? nobody);
    return row?.active === 1 && fits ? { name: row.name, role: row.role } : undefined;
  }

  /** Opens a session; the secret is for the cookie and is kept nowhere. */
  openSession(name: string, now: number): { secret: string; expires: number } {
    const secret = randomBytes(32).toString("base64url");
    const expires = now + sessionMs;
    this.#db.prepare("DELETE FROM session WHERE expires <= ?").run(now);
    this.#db.prepare("INSERT INTO session VALUES (?, ?, ?)").run(digest(secret), name, expires);
    return { secret, expires };
  }

  closeSession(secret: string): void {
    this.#db.prepare("DELETE FROM session WHERE id = ?").run(digest(secret));
  }

  ofSession(secret: string, now: number): Person | undefined {
    return this.#db
      .prepare<[Buffer, number], Person>(
        "SELECT person.name, role FROM session JOIN person USING (name) WHERE id = ? AND expires > ? AND active = 1",
      )
      .get(digest(secret), now);
  }

  /** A token for a program; its secret is told once. @throws PeopleError for a label that is taken */
  addToken(label: string, role: Role, expires: number): string {
    checkRole(role);
    if (this.#db.prepare("SELECT 1 FROM token WHERE label = ?").get(label)) {
      throw new PeopleError(`a token "${label}" is there already; remove it first, or take another label.`);
    }
    const secret = `mr_${randomBytes(32).toString("base64url")}`;
    this.#db.prepare("INSERT INTO token VALUES (?, ?, ?, ?)").run(digest(secret), label, role, expires);
    return secret;
  }

  removeToken(label: string): void {
    const { changes } = this.#db.prepare("DELETE FROM token WHERE label = ?").run(label);
    if (changes === 0) throw new PeopleError(`there is no token "${label}".`);
  }

  tokens(): { label: string; role: Role; expires: number }[] {
    return this.#db
      .prepare<[], { label: string; role: Role; expires: number }>(
        "SELECT label, role, expires FROM token ORDER BY label",
      )
      .all();
  }

  ofToken(secret: string, now: number): Person | undefined {
    return this.#db
      .prepare<[Buffer, number], Person>(
        "SELECT 'token ' || label AS name, role FROM token WHERE id = ? AND expires > ?",
      )
      .get(digest(secret), now);
  }

  /** How a person has arranged their screens, as it was kept; undefined before the first time. */
  settings(name: string): string | undefined {
    return this.#db.prepare<[string], { value: string }>("SELECT value FROM setting WHERE name = ?").get(name)?.value;
  }

  keepSettings(name: string, value: string): void {
    this.#db.prepare("INSERT OR REPLACE INTO setting VALUES (?, ?)").run(name, value);
  }

  close(): void {
    this.#db.close();
  }

  #row(name: string): PersonRow | undefined {
    return this.#db.prepare<[string], PersonRow>("SELECT * FROM person WHERE name = ?").get(name);
  }

  #change(name: string, sql: string, ...values: unknown[]): void {
    const { changes } = this.#db.prepare(sql).run(...values, name);
    if (changes > 0) return;
    const names = this.list().map((person) => person.name);
    throw new PeopleError(`${name} is nobody here; there are ${names.join(", ") || "no people yet"}.`);
  }
}

/** Stands in where there is no such person, so that the answer takes as long. */
const nobody: PasswordHash = { salt: Buffer.alloc(16), hash: Buffer.alloc(32) };

function digest(secret: string): Buffer {
  return createHash("sha256").update(secret).digest();
}

function hashed(password: string): Promise<PasswordHash> {
  if (password.length < shortestPassword) {
    throw new PeopleError(`the password has ${password.length} characters, expected at least ${shortestPassword}.`);
  }
  return hashPassword(password);
}

function checkRole(role: string): void {
  if (!(roles as readonly string[]).includes(role)) {
    throw new PeopleError(`role is "${role}", expected one of ${roles.join(", ")}.`);
  }
}
