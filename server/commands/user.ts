import { mkdirSync } from "node:fs";
import { join } from "node:path";
import { Command, InvalidArgumentError, Option } from "commander";
import { readPlantConfig } from "../config/plant-config.ts";
import { PeopleStore } from "../people/people-store.ts";
import { type Role, roles } from "../people/person.ts";
import { askPassword } from "./ask-password.ts";

interface Options {
  config: string;
  role: Role;
  days: number;
  json?: boolean;
}

/** `user`: who may sign in, and tokens for programs. The service may run meanwhile. */
export function userCommand(): Command {
  const user = new Command("user").description("people who may sign in, and tokens for programs");
  const sub = (name: string, description: string) =>
    user.command(name).description(description).requiredOption("--config <file>", "the plant's configuration");
  const role = () => new Option("--role <role>", "what they may do").choices(roles).makeOptionMandatory();

  sub("list", "everybody, and every token")
    .option("--json", "print as JSON")
    .action((options: Options) => withStore(options, (store) => print(store, options)));
  sub("add <name>", "add a person; the password is asked for, or read from standard input")
    .addOption(role())
    .action((name: string, options: Options) =>
      withStore(options, async (store) => store.add(name, options.role, await askPassword())),
    );
  sub("password <name>", "set a person's password; signs them out everywhere").action(
    (name: string, options: Options) =>
      withStore(options, async (store) => store.setPassword(name, await askPassword())),
  );
  sub("role <name>", "change what a person may do")
    .addOption(role())
    .action((name: string, options: Options) => withStore(options, (store) => store.setRole(name, options.role)));
  sub("leave <name>", "a person may sign in no more; their name stays on the record").action(
    (name: string, options: Options) => withStore(options, (store) => store.setActive(name, false)),
  );
  sub("return <name>", "a person who left may sign in again").action((name: string, options: Options) =>
    withStore(options, (store) => store.setActive(name, true)),
  );
  sub("token <label>", "make a token for a program; it is printed once")
    .addOption(role())
    .requiredOption("--days <number>", "how long it holds", daysNumber)
    .action((label: string, options: Options) =>
      withStore(options, (store) => {
        console.log(store.addToken(label, options.role, Date.now() + options.days * 86_400_000));
      }),
    );
  sub("remove-token <label>", "end a token now").action((label: string, options: Options) =>
    withStore(options, (store) => store.removeToken(label)),
  );
  return user;
}

async function withStore(options: Options, act: (store: PeopleStore) => void | Promise<void>): Promise<void> {
  const { data } = readPlantConfig(options.config);
  mkdirSync(data, { recursive: true });
  const store = new PeopleStore(join(data, "people.db"));
  try {
    await act(store);
  } finally {
    store.close();
  }
}

function print(store: PeopleStore, { json }: Options): void {
  const people = store.list();
  const tokens = store.tokens().map((token) => ({ ...token, expires: new Date(token.expires).toISOString() }));
  if (json) {
    console.log(JSON.stringify({ people, tokens }));
    return;
  }
  for (const { name, role, active } of people) console.log(`${name}: ${role}${active ? "" : ", has left"}`);
  for (const { label, role, expires } of tokens) console.log(`token ${label}: ${role}, until ${expires}`);
  if (people.length + tokens.length === 0) console.log("nobody yet");
}

function daysNumber(text: string): number {
  const days = Number(text);
  if (!(days > 0 && days <= 3660)) throw new InvalidArgumentError("expected a number of days up to 3660");
  return days;
}
