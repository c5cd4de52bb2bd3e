import { type ChildProcess, spawn } from "node:child_process";
import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import path from "node:path";
import { setTimeout as pause } from "node:timers/promises";
import { freePort } from "#db/setup/ports.mjs";
import { createTestDatabase } from "#tests/helpers/database.ts";

export type Stack = AsyncDisposable & {
	baseUrl: string;
	inboxUrl: string;
	/** Where the files of photos lie. */
	photoFolder: string;
	database: Awaited<ReturnType<typeof createTestDatabase>>;
	/** What the server, the worker and the fakes have said so far, for a failing test to show. */
	output: () => string;
	/** Ends one program at once, as a crash would. */
	kill: (name: ProgramName) => Promise<void>;
	start: (name: ProgramName) => Promise<void>;
};
export type ProgramName = "mail" | "signIn" | "worker" | "server";

const programs: Record<ProgramName, string[]> = {
	mail: ["build/programs/mail.js"],
	signIn: ["build/programs/sign-in.js"],
	worker: ["build/programs/worker.js"],
	server: ["--max-http-header-size=131072", "node_modules/@react-router/serve/bin.js", "build/server/index.js"],
};

/**
 * The whole product beside a test: server, worker and both fakes as programs of their own, on free ports, over a
 * database of its own. The production build must be there; `npm test` makes it first.
 */
export async function startStack(
	options: { seed?: "none" | "demo"; coordinatorSubject?: string; build?: string } = {},
): Promise<Stack> {
	const database = await createTestDatabase({ seed: options.seed ?? "none" });
	const photoFolder = await mkdtemp(path.join(tmpdir(), "tallygrove-photos-"));
	const [port, mailPort, inboxPort, signInPort] = await Promise.all([freePort(), freePort(), freePort(), freePort()]);
	const baseUrl = `http://localhost:${port}`;
	const inboxUrl = `http://127.0.0.1:${inboxPort}`;
	const issuer = `http://127.0.0.1:${signInPort}`;
	const env = {
		PATH: process.env.PATH,
		NODE_ENV: "production",
		DEMO: "1",
		PORT: String(port),
		BASE_URL: baseUrl,
		DATABASE_URL: database.appUrl,
		DATABASE_READER_URL: database.readerUrl,
		SESSION_SECRET: "only-for-tests-0123456789abcdef0123456789abcdef",
		SMTP_URL: `smtp://127.0.0.1:${mailPort}`,
		INBOX_URL: inboxUrl,
		OAUTH_ISSUER: issuer,
		OAUTH_CLIENT_ID: "tallygrove",
		OAUTH_CLIENT_SECRET: "only-for-tests-client",
		PHOTO_DIR: photoFolder,
		LOG_LEVEL: "warn",
		...(process.env.CHROMIUM_PATH && { CHROMIUM_PATH: process.env.CHROMIUM_PATH }),
		...(options.coordinatorSubject && { COORDINATOR_SUBJECT: options.coordinatorSubject }),
	};
	const children = new Map<ProgramName, ChildProcess>();
	const said: string[] = [];
	const probes: Record<ProgramName, string | null> = {
		mail: `${inboxUrl}/messages.json`,
		signIn: `${issuer}/.well-known/openid-configuration`,
		worker: null,
		server: `${baseUrl}/healthz`,
	};

	async function start(name: ProgramName): Promise<void> {
		const script =
			name === "server" && options.build ? [...programs.server.slice(0, -1), options.build] : programs[name];
		const child = spawn(process.execPath, script, { env, stdio: ["ignore", "pipe", "pipe"] });
		children.set(name, child);
		for (const stream of [child.stdout, child.stderr]) {
			stream?.on("data", (chunk: Buffer) =>
				said.push(
					...String(chunk)
						.split("\n")
						.map((line) => `[${name}] ${line}`),
				),
			);
		}
		const probe = probes[name];
		if (probe) await answers(probe, () => said.join("\n"), child);
	}
	async function kill(name: ProgramName): Promise<void> {
		const child = children.get(name);
		if (!child || child.exitCode !== null || child.signalCode !== null) return;
		const gone = new Promise((resolve) => child.once("exit", resolve));
		child.kill("SIGKILL");
		await gone;
	}

	await Promise.all([start("mail"), start("signIn"), start("worker")]);
	await start("server");
	return {
		baseUrl,
		inboxUrl,
		database,
		photoFolder,
		output: () => said.slice(-200).join("\n"),
		kill,
		start,
		async [Symbol.asyncDispose]() {
			for (const name of children.keys()) await kill(name);
			await database[Symbol.asyncDispose]();
			await rm(photoFolder, { recursive: true, force: true });
		},
	};
}

async function answers(url: string, output: () => string, child: ChildProcess): Promise<void> {
	for (let attempt = 0; attempt < 300; attempt++) {
		if (child.exitCode !== null) break;
		const response = await fetch(url).catch(() => null);
		if (response?.ok) return;
		await pause(100);
	}
	throw new Error(`${url} did not come up:\n${output()}`);
}
