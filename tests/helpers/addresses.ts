import { readFileSync } from "node:fs";
import { join } from "node:path";
import type { RouteConfigEntry } from "@react-router/dev/routes";
import routes from "#app/routes.ts";

const app = join(import.meta.dirname, "../../app");

/** An address of the product, whether something can be posted to it, and the file that answers. */
export type Address = { path: string; acts: boolean; file: string };

/** Every address of the table of routes, so that a new one is tried by the tests that go through all of them. */
export async function listAddresses(): Promise<Address[]> {
	return addressesOf(await routes);
}

function addressesOf(entries: RouteConfigEntry[], before = ""): Address[] {
	return entries.flatMap(({ path = "", file, children }) => {
		const here = [before, path].filter(Boolean).join("/");
		const acts = /export (?:async function action\b|const action\b|function action\b|\{[^}]*\baction\b)/.test(
			readFileSync(join(app, file), "utf8"),
		);
		const own = children?.length ? [] : [{ path: here, acts, file: join(app, file) }];
		return [...own, ...addressesOf(children ?? [], here)];
	});
}

/** The names of what an address leaves open. */
export const paramsOf = (path: string) => [...path.matchAll(/:(\w+)/g)].map((match) => match[1]!);

export const filled = (path: string, ids: Record<string, string>) =>
	`/${path.replaceAll("?", "").replace(/:(\w+)/g, (_, name: string) => ids[name] ?? "")}`;
