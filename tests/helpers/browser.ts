import { AxeBuilder } from "@axe-core/playwright";
import type { Client } from "pg";
import { type Browser, type BrowserContextOptions, chromium, type Page } from "playwright-core";

const flags = [
	"--no-sandbox",
	"--disable-quic",
	"--no-first-run",
	"--disable-background-networking",
	"--disable-component-update",
	"--disable-sync",
	// Pages of a test live for seconds: compiling their scripts for speed costs a fifth more than it saves.
	"--js-flags=--no-turbofan --no-maglev --single-threaded-gc",
	// WebGL in software, without a warning for each map; all else is drawn without it, which is much cheaper.
	"--use-angle=swiftshader",
	"--disable-gpu-compositing",
	"--enable-unsafe-swiftshader",
];

export const phone: BrowserContextOptions = { viewport: { width: 375, height: 740 }, hasTouch: true, isMobile: true };
export const desktop: BrowserContextOptions = { viewport: { width: 1280, height: 900 } };

/** Debian's Chromium, as all tests start it. */
export const chromiumSettings = {
	executablePath: process.env.CHROMIUM_PATH ?? "/usr/bin/chromium-headless-shell",
	args: flags,
};

/** Where speed is measured, the browser compiles scripts for speed, as a reader's does. */
export const measuringSettings = {
	...chromiumSettings,
	args: flags.filter((flag) => !flag.startsWith("--js-flags")),
};

export function openBrowser(): Promise<Browser> {
	return chromium.launch(chromiumSettings);
}

/** A page of a person's own: no cookie shared with any other. What its console complains of is kept. */
export async function openPage(browser: Browser, options: BrowserContextOptions & { language?: string } = {}) {
	const { language = "en-US", ...context } = options;
	const page = await (await browser.newContext({ locale: language, ...desktop, ...context })).newPage();
	const complaints: string[] = [];
	page.on("pageerror", (error) => complaints.push(`${page.url()}: ${error.message}`));
	page.on("console", (message) => {
		if (message.type() === "error") complaints.push(`${page.url()}: ${message.text()}`);
	});
	page.setDefaultTimeout(30_000);
	return Object.assign(page, { complaints });
}

/** Ends all that a test has opened: a page left open goes on working beside the next test's. */
export async function closePages(browser: Browser): Promise<void> {
	await Promise.all(browser.contexts().map((context) => context.close()));
}

/** Every rule of WCAG 2.2 A and AA that axe can check, as one line a finding. */
export async function axeFindings(page: Page): Promise<string[]> {
	// Our pages have no frames; the way meant for those opens a second page for each look.
	const { violations } = await new AxeBuilder({ page })
		.setLegacyMode()
		.withTags(["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"])
		.analyze();
	return violations.map(
		(finding) => `${page.url()} ${finding.id}: ${finding.nodes.map((node) => node.target.join(" ")).join("; ")}`,
	);
}

/** Signs in through the provider's own page as one of its people. */
export async function signIn(page: Page, baseUrl: string, name: string): Promise<void> {
	await page.goto(`${baseUrl}/sign-in/start`);
	await page.getByText(name, { exact: false }).first().click();
	await page.waitForURL(`${baseUrl}/**`);
}

/** Signs Del Fenwick in and grants these states, as the first coordinator would. */
export async function signInAsAssociate(page: Page, baseUrl: string, owner: Client, states: string[]): Promise<void> {
	await signIn(page, baseUrl, "Del Fenwick");
	await owner.query(
		`insert into auth.role_grant (person_id, role, state_fips)
		select person_id, 'associate', s from auth.person, unnest($1::text[]) s where subject = 'demo-del-fenwick'`,
		[states],
	);
}
