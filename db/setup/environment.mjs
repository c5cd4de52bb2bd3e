// Which services are the caller's and which are made here, and what the server is told of them.
import { spawnSync } from "node:child_process";
import { join } from "node:path";
import { productionProblems } from "./production.mjs";
import { local, localSecrets, root } from "./local.mjs";
import { rememberedPort } from "./ports.mjs";
import { Stop } from "./steps.mjs";

const databaseNames = ["DATABASE_URL", "DATABASE_READER_URL", "DATABASE_OWNER_URL"];

function codeVersion() {
	const { status, stdout } = spawnSync("git", ["rev-parse", "--short=12", "HEAD"], { cwd: root, encoding: "utf8" });
	return status === 0 ? stdout.trim() : undefined;
}

function checkPort(text = "3000") {
	const port = Number(text);
	if (/^\d{1,5}$/.test(text) && port >= 1 && port <= 65_535) return port;
	throw new Stop(`PORT is "${text}"; it must be a number from 1 to 65535.`);
}

/**
 * Reads what the caller set. @throws Stop naming each variable that is missing or refused.
 * @returns which parts are private to this checkout, and the settings so far.
 */
export function readCaller(given = process.env) {
	const production = given.NODE_ENV === "production";
	const problems = production ? productionProblems(given) : [];
	const set = databaseNames.filter((name) => given[name]);
	if (!production && set.length > 0 && set.length < databaseNames.length) {
		const missing = databaseNames.filter((name) => !given[name]);
		problems.push(`${missing.join(" and ")}: missing; all three of ${databaseNames.join(", ")} belong together`);
	}
	if (!production && given.OAUTH_ISSUER && !(given.OAUTH_CLIENT_ID && given.OAUTH_CLIENT_SECRET)) {
		problems.push("OAUTH_CLIENT_ID and OAUTH_CLIENT_SECRET: needed with OAUTH_ISSUER");
	}
	if (problems.length)
		throw new Stop(`Not started. These settings need mending:\n${problems.map((p) => `  ${p}\n`).join("")}`);
	const port = checkPort(given.PORT);
	return {
		production,
		port,
		baseUrl: (given.BASE_URL || `http://localhost:${port}`).replace(/\/$/, ""),
		privateDatabase: set.length === 0,
		fakeMail: !given.SMTP_URL,
		fakeSignIn: !given.OAUTH_ISSUER,
	};
}

/** What every program started here is told. Nothing that the caller set is changed. */
export async function serviceEnvironment(caller, databaseAddresses) {
	const secrets = localSecrets();
	const defaults = {
		SESSION_SECRET: secrets.session,
		PHOTO_DIR: join(local, "photos"),
		MAIL_FROM: "Four Rivers Fruit Network <survey@fourrivers.example>",
		...(codeVersion() && { CODE_VERSION: codeVersion() }),
	};
	if (caller.fakeMail) {
		defaults.SMTP_URL = `smtp://127.0.0.1:${await rememberedPort("mailPort")}`;
		defaults.INBOX_URL = `http://127.0.0.1:${await rememberedPort("inboxPort")}`;
	}
	if (caller.fakeSignIn) {
		// Another host name than the server's: cookies do not tell ports apart.
		defaults.OAUTH_ISSUER = `http://127.0.0.1:${await rememberedPort("signInPort")}`;
		defaults.OAUTH_CLIENT_ID = "tallygrove";
		defaults.OAUTH_CLIENT_SECRET = secrets.client;
	}
	// What the demo shows can be signed in to by anybody: this machine only, unless the caller says otherwise.
	if (!caller.production) Object.assign(defaults, { DEMO: "1", HOST: "127.0.0.1" });
	const set = Object.fromEntries(Object.entries(process.env).filter(([, value]) => value !== ""));
	const fixed = { PORT: `${caller.port}`, BASE_URL: caller.baseUrl, ...databaseAddresses };
	return { ...defaults, ...set, ...fixed };
}
