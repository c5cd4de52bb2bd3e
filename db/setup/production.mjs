// What NODE_ENV=production asks for: nothing that is made for trying the product out.
import { isIP } from "node:net";
import { isAbsolute, join, relative, resolve } from "node:path";
import { root } from "./local.mjs";

const needed = [
	"BASE_URL",
	"DATABASE_URL",
	"DATABASE_READER_URL",
	"DATABASE_OWNER_URL",
	"SESSION_SECRET",
	"SMTP_URL",
	"MAIL_FROM",
	"OAUTH_ISSUER",
	"OAUTH_CLIENT_ID",
	"OAUTH_CLIENT_SECRET",
	"PHOTO_DIR",
];

function parse(text) {
	try {
		return new URL(text);
	} catch {
		return undefined;
	}
}

/** A name or address that means this machine, where anybody on it could pose as the service. */
function isThisMachine(hostname) {
	const host = hostname
		.replace(/^\[|\]$/g, "")
		.replace(/\.$/, "")
		.toLowerCase();
	if (host === "localhost" || host.endsWith(".localhost") || host === "::1" || host === "::") return true;
	return (isIP(host) === 4 && /^(127|0)\./.test(host)) || host.startsWith("::ffff:7f");
}

function addressProblem(text) {
	const url = parse(text);
	if (!url) return "is no address";
	if (url.protocol !== "https:") return "must be an https address";
	if (isThisMachine(url.hostname)) return "is an address of this machine, so it could be a fake";
	return undefined;
}

function secretProblem(text) {
	if (/demo|default|change.?me|secret|password|example/i.test(text)) return "is a default; make a random one";
	return undefined;
}

function sessionProblem(text) {
	if (text.length < 32) return "is too short; 32 characters or more, made at random";
	if (new Set(text).size < 10) return "is too regular to be random";
	return secretProblem(text);
}

/** Photos are shown to those who may see them and to nobody else, so they lie nowhere that is served as it stands. */
function folderProblem(text) {
	if (!isAbsolute(text)) return "must be a whole path, beginning with /";
	const served = ["public", "build"].map((name) => relative(join(root, name), resolve(text)));
	return served.some((path) => !path.startsWith("..")) ? "lies in a folder that is served to everybody" : undefined;
}

/** The reader's wall stands only when it comes in as another role. */
function roleProblems(given) {
	const roleOf = (name) => parse(given[name] ?? "")?.username;
	const twice = (a, b) => roleOf(a) && roleOf(a) === roleOf(b);
	const pairs = [
		["DATABASE_READER_URL", "DATABASE_URL"],
		["DATABASE_URL", "DATABASE_OWNER_URL"],
		["DATABASE_READER_URL", "DATABASE_OWNER_URL"],
	];
	return pairs.filter(([a, b]) => twice(a, b)).map(([a, b]) => `${a}: must use another role than ${b}`);
}

/** @returns one line for each variable that is missing or refused; none when all is well. */
export function productionProblems(given) {
	const missing = needed.filter((name) => !given[name]).map((name) => `${name}: missing`);
	const checks = {
		BASE_URL: addressProblem,
		OAUTH_ISSUER: addressProblem,
		SESSION_SECRET: sessionProblem,
		OAUTH_CLIENT_SECRET: secretProblem,
		PHOTO_DIR: folderProblem,
	};
	const refused = Object.entries(checks).flatMap(([name, check]) => {
		const problem = given[name] && check(given[name]);
		return problem ? [`${name}: ${problem}`] : [];
	});
	if (given.DEMO && !/^(0|false|no|off)$/i.test(given.DEMO)) refused.push("DEMO: cannot be set in production");
	return [...missing, ...refused, ...roleProblems(given)];
}
