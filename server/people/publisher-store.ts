import Database from "better-sqlite3";
import { MillraceError } from "../../core/errors.ts";
import { hashPassword, isPassword, type PasswordHash, shortestPassword } from "./password.ts";

export class PublisherError extends MillraceError {
  readonly code = "publisher";
}

/** Stands for every stream of the plant. */
export const everyStream = "*";

/** A program that may sign in at the embedded broker: an analyzer's gateway, or one that only listens. */
export interface Publisher {
  name: string;
  /** the streams whose readings and states it may publish; none: it listens only */
  streams: string[];
}

const schema =
  "CREATE TABLE IF NOT EXISTS publisher (name TEXT PRIMARY KEY, streams TEXT NOT NULL, salt BLOB NOT NULL, hash BLOB NOT NULL) STRICT";

interface Row extends PasswordHash {
  name: string;
  /** JSON */
  streams: string;
}

/** Who may sign in at the embedded broker, and what they may publish. Secrets are kept as scrypt hashes, in the same file as those of the people. */
export class PublisherStore {
  readonly #db: Database.Database;
  readonly #all;
  readonly #one;

  constructor(file: string) {
    this.#db = new Database(file, { timeout: 5000 });
    this.#db.pragma("journal_mode = WAL");
    this.#db.pragma("synchronous = FULL");
    this.#db.exec(schema);
    this.#all = this.#db.prepare<[], Row>("SELECT * FROM publisher ORDER BY name");
    this.#one = this.#db.prepare<[string], Row>("SELECT * FROM publisher WHERE name = ?");
  }

  isEmpty(): boolean {
    return this.#all.get() === undefined;
  }

  list(): Publisher[] {
    return this.#all.all().map(publisherOf);
  }

  find(name: string): Publisher | undefined {
    const row = this.#one.get(name);
    return row && publisherOf(row);
  }

  /** @throws PublisherError for a name that is taken or a secret that is too short */
  async add({ name, streams }: Publisher, secret: string): Promise<void> {
    if (name.trim() !== name || name === "")
      throw new PublisherError(`name is "${name}", expected one without spaces around it.`);
    if (secret.length < shortestPassword)
      throw new PublisherError(`the secret has ${secret.length} characters, expected at least ${shortestPassword}.`);
    if (this.#one.get(name))
      throw new PublisherError(`${name} is known already; remove it first, or take another name.`);
    const { salt, hash } = await hashPassword(secret);
    this.#db.prepare("INSERT INTO publisher VALUES (?, ?, ?, ?)").run(name, JSON.stringify(streams), salt, hash);
  }

  remove(name: string): void {
    const { changes } = this.#db.prepare("DELETE FROM publisher WHERE name = ?").run(name);
    if (changes > 0) return;
    const names = this.list().map((known) => known.name);
    throw new PublisherError(`there is no publisher "${name}"; there are ${names.join(", ") || "none yet"}.`);
  }

  /** The publisher whose secret it is; undefined when it is not, whether or not there is such a publisher (both take the same time). */
  async check(name: string, secret: string): Promise<Publisher | undefined> {
    const row = this.#one.get(name);
    const fits = await isPassword(secret, row ?? nobody);
    return row && fits ? publisherOf(row) : undefined;
  }

  close(): void {
    this.#db.close();
  }
}

/** Stands in where there is no such publisher, so that the answer takes as long. */
const nobody: PasswordHash = { salt: Buffer.alloc(16), hash: Buffer.alloc(32) };

function publisherOf({ name, streams }: Row): Publisher {
  return { name, streams: JSON.parse(streams) as string[] };
}
