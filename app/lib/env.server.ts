import path from "node:path";
import { z } from "zod";

const Settings = z.object({
	NODE_ENV: z.enum(["development", "production", "test"]).default("development"),
	BASE_URL: z.url().transform((url) => url.replace(/\/$/, "")),
	DATABASE_URL: z.string().min(1),
	DATABASE_READER_URL: z.string().min(1),
	SESSION_SECRET: z.string().min(32),
	SMTP_URL: z.string().min(1),
	MAIL_FROM: z.string().default("Four Rivers Fruit Network <survey@fourrivers.example>"),
	OAUTH_ISSUER: z.url(),
	OAUTH_CLIENT_ID: z.string().min(1),
	OAUTH_CLIENT_SECRET: z.string().min(1),
	/** Set by the start command when outside services are local fakes and the data is invented. */
	DEMO: z.stringbool().default(false),
	INBOX_URL: z.url().optional(),
	/** Address of the licence that the network gives its released figures. Without one, files and pages name none. */
	DATA_LICENSE_URL: z.url({ protocol: /^https?$/ }).optional(),
	CODE_VERSION: z.string().default("unversioned"),
	/** The first coordinator, who grants all other roles: the provider's subject. */
	COORDINATOR_SUBJECT: z.string().optional(),
	/** The browser that prints reports, where it is not Debian's. Without one, reports have no PDF and the desk is told. */
	CHROMIUM_PATH: z.string().min(1).optional(),
	/** The folder of growers' photos, which every server and worker shares and no web server serves. */
	PHOTO_DIR: z
		.string()
		.min(1)
		.default(".local/photos")
		.transform((folder) => path.resolve(folder)),
});
export type Settings = z.infer<typeof Settings>;

let settings: Settings | undefined;

/** The process's settings, read once; an unset or unsafe one stops the process with its name. */
export function env(): Settings {
	settings ??= readSettings(process.env);
	return settings;
}

export function readSettings(source: NodeJS.ProcessEnv): Settings {
	const parsed = Settings.safeParse(source);
	if (!parsed.success) {
		const names = parsed.error.issues.map((issue) => `${issue.path.join(".")}: ${issue.message}`);
		throw new Error(`These settings are missing or wrong: ${names.join("; ")}`);
	}
	if (parsed.data.NODE_ENV === "production" && !parsed.data.DEMO) {
		refuseFakes(parsed.data);
		if (!source.PHOTO_DIR) throw new Error("PHOTO_DIR must be set in production");
	}
	return parsed.data;
}

/** Outside the demo a production server never trusts a sign-in that anyone on the machine could forge. */
function refuseFakes({ OAUTH_ISSUER, SESSION_SECRET, OAUTH_CLIENT_SECRET }: Settings): void {
	const issuer = new URL(OAUTH_ISSUER);
	if (issuer.protocol !== "https:") throw new Error("OAUTH_ISSUER must be an https address in production");
	for (const [name, value] of Object.entries({ SESSION_SECRET, OAUTH_CLIENT_SECRET })) {
		if (/demo|default|change.?me|secret/i.test(value))
			throw new Error(`${name} must not be a default value in production`);
	}
}
