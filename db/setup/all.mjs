// The whole start: settings, packages, database, build, services.
import { people } from "../../fakes/sign-in/people.mjs";
import { ensureBuild } from "./build.mjs";
import { bringUpToDate, followIssuer, migrate, preparePrivateDatabase } from "./database.mjs";
import { atEnd } from "./end.mjs";
import { readCaller, serviceEnvironment } from "./environment.mjs";
import { ensurePackages } from "./packages.mjs";
import { isFree } from "./ports.mjs";
import { claim, release } from "./running.mjs";
import { startService, waitFor } from "./services.mjs";
import { seconds, step, Stop } from "./steps.mjs";

/** A program beside the server: as it was built or, in development, as its sources are now. */
const program = (name, source, dev) => (dev ? ["--import", "tsx", source] : [`build/programs/${name}.js`]);
// Room for an address with thousands of filters, so that the API can say what is wrong with it.
const server = ["--max-http-header-size=131072", "node_modules/@react-router/serve/bin.js", "./build/server/index.js"];

async function beginAlone(caller) {
	const leftovers = await claim(caller.baseUrl);
	atEnd(async () => release());
	if (leftovers) console.log(`Ended ${leftovers} programs that an earlier start left behind.`);
	if (await isFree(caller.port)) return;
	throw new Stop(
		`Port ${caller.port} is taken by another program. Stop that, or choose another port: PORT=${caller.port + 1} npm start`,
	);
}

async function prepareDatabase(caller) {
	const database = caller.privateDatabase ? await preparePrivateDatabase() : undefined;
	const environment = await serviceEnvironment(caller, database?.addresses);
	if (!database) await migrate(environment);
	else {
		await bringUpToDate(database.cluster, environment);
		if (caller.fakeSignIn) await followIssuer(database.cluster, environment.OAUTH_ISSUER);
	}
	return environment;
}

function startFakes(caller, env, dev) {
	const started = [];
	if (caller.fakeSignIn) {
		const service = startService("demo sign-in", program("sign-in", "fakes/sign-in/server.ts", dev), env);
		started.push(waitFor(service, `${env.OAUTH_ISSUER}/healthz`));
	}
	if (caller.fakeMail) {
		const service = startService("demo mail", program("mail", "fakes/mail/server.ts", dev), env);
		started.push(waitFor(service, `${env.INBOX_URL}/healthz`));
	}
	return started;
}

async function startProduct(caller, env, dev) {
	// React is far slower in development mode; DEMO is what allows the fakes.
	const environment = { ...env, NODE_ENV: dev ? "development" : "production" };
	startService(
		"job worker",
		[...(dev ? ["--watch", "--watch-preserve-output"] : []), ...program("worker", "app/jobs/worker.ts", dev)],
		environment,
	);
	const host = dev && env.HOST ? ["--host", env.HOST] : [];
	const hot = ["node_modules/@react-router/dev/bin.js", "dev", "--port", `${caller.port}`, "--strictPort", ...host];
	const service = startService("server", dev ? hot : server, environment, { shows: dev });
	await waitFor(service, `http://${reachable(env.HOST)}:${caller.port}/healthz`, { minutes: 2 });
}

/** Where this machine reaches a server that listens on `host`. */
function reachable(host) {
	if (!host || host === "0.0.0.0" || host === "::") return "localhost";
	return host.includes(":") ? `[${host}]` : host;
}

function welcome(caller, env, since) {
	const lines = [`\nTallygrove is ready after ${seconds(since)}:  ${caller.baseUrl}`];
	if (caller.fakeMail) lines.push(`Mail that the demo sends:            ${env.INBOX_URL}`);
	if (caller.fakeSignIn) {
		const width = Math.max(...people.map(({ name }) => name.length)) + 2;
		lines.push("", "Sign in as one of these invented people, or as somebody new:");
		lines.push(...people.map(({ name, note }) => `  ${name.padEnd(width)}${note.en}`));
	}
	console.log([...lines, "", "Stop with Ctrl-C.\n"].join("\n"));
}

/** Starts everything and comes back when it is ready; the services then keep the process alive. */
export async function startAll({ dev }) {
	const since = performance.now();
	const caller = readCaller();
	await beginAlone(caller);
	await step("npm packages", ensurePackages);
	const env = await prepareDatabase(caller);
	if (!dev) await step("Production build", ensureBuild);
	await step("Services", async () => {
		const fakes = startFakes(caller, env, dev);
		await Promise.all([...fakes, startProduct(caller, env, dev)]);
	});
	welcome(caller, env, since);
}
