import type { Page } from "playwright-core";
import { expect } from "vitest";
import { axeFindings } from "#tests/helpers/browser.ts";
import { httpVisitor } from "#tests/helpers/http-visitor.ts";
import type { TestGrower } from "./orchards.ts";

type Said = { open: string; begin: string; next: string; send: string; thanks: string };
export const said: Record<"en" | "es", Said> = {
	en: {
		open: "Open my survey",
		begin: "I agree, begin",
		next: "Continue",
		send: "Send my answers",
		thanks: "Thank you, we have your answers",
	},
	es: {
		open: "Abrir mi encuesta",
		begin: "Estoy de acuerdo, empezar",
		next: "Continuar",
		send: "Enviar mis respuestas",
		thanks: "Gracias, ya tenemos sus respuestas",
	},
};

/** Answers a whole survey from its link, screen by screen, as a grower does. @returns the receipt's code. */
export async function answerByHand(
	page: Page,
	link: string,
	grower: TestGrower,
	{ scripts }: { scripts: boolean },
): Promise<string> {
	const words = said[grower.language];
	// The checker of accessibility is a script itself; without scripts the same markup is served.
	const accessible = async () => {
		if (scripts) expect(await axeFindings(page)).toEqual([]);
	};
	const next = () => page.getByRole("button", { name: words.next, exact: true }).click();
	await page.goto(link);
	await accessible();
	await page.getByRole("button", { name: words.open }).click();
	await page.getByRole("button", { name: words.begin }).waitFor();
	// The token is in no address from here on.
	expect(page.url()).not.toContain(link.slice(link.lastIndexOf("/") + 1));
	await accessible();
	await page.getByRole("button", { name: words.begin }).click();

	await page.locator("[name=normal_crop]").waitFor();
	// What the directory knows is filled in already.
	expect(await page.locator("[name=bearing_trees]").inputValue()).toBe(String(grower.trees));
	await accessible();
	await page.fill("[name=normal_crop]", "a lot");
	await page.fill("[name=harvested]", `${grower.harvestedLb} lb`);
	await next();
	await page.locator("#field-normal_crop[aria-invalid=true]").waitFor();
	expect(await page.locator("[name=normal_crop]").inputValue()).toBe("a lot");
	await page.fill("[name=normal_crop]", String(grower.normalLb));
	await next();

	await page.locator("[name=cause_freeze]").waitFor();
	await page.fill("[name=cause_freeze]", String(grower.freezeShare));
	await page.fill("[name=cause_other]", `${100 - grower.freezeShare}%`);
	await next();
	await page.locator("[name=first_harvest]").waitFor();
	await next();
	await page.locator("[name=bud_set]").first().waitFor();
	await accessible();
	await page.check("[name=bud_set][value=normal]");
	await next();

	await page.getByRole("button", { name: words.send }).waitFor();
	// A phone that still had something to send shows the page anew once it is sent.
	await page.waitForLoadState("networkidle");
	await accessible();
	await page.getByRole("button", { name: words.send }).click();
	await page.getByRole("heading", { name: words.thanks }).waitFor();
	await accessible();
	const code = /\b[A-Z0-9]{4}-[A-Z0-9]{4}\b/.exec(await page.innerText("main"))?.[0];
	expect(code).toBeDefined();
	return code!;
}

/** Presses Tab until the focus is on what is wanted; fails when the keyboard does not get there. */
async function tabTo(page: Page, selector: string): Promise<void> {
	const there = () => page.evaluate((wanted) => document.activeElement?.matches(wanted) ?? false, selector);
	for (let pressed = 0; pressed < 80; pressed += 1) {
		await page.keyboard.press("Tab");
		if (await there()) return;
	}
	throw new Error(`the keyboard does not reach ${selector} on ${page.url()}`);
}

/** A day that may be left empty and that no calendar has is not lost without a word, though its box sends nothing. */
async function saysThatNoSuchDayIs(page: Page, button: string): Promise<void> {
	await tabTo(page, "[name=first_harvest]");
	await page.keyboard.type("02302026");
	await tabTo(page, button);
	await page.keyboard.press("Enter");
	await page.locator("[name=first_harvest][aria-invalid=true]").waitFor();
}

/** Answers a whole survey without a pointer. */
export async function answerByKeyboard(page: Page, link: string, grower: TestGrower): Promise<void> {
	const button = "main form:last-of-type button:not([name])";
	const press = async () => {
		const before = page.url();
		await tabTo(page, button);
		await page.keyboard.press("Enter");
		await page.waitForURL((url) => url.href !== before);
	};
	const type = async (name: string, text: string) => {
		await tabTo(page, `[name=${name}]`);
		await page.keyboard.type(text);
	};
	await page.goto(link);
	await press();
	await press();
	await page.locator("[name=normal_crop]").waitFor();
	await type("normal_crop", String(grower.normalLb));
	await type("harvested", String(grower.harvestedLb));
	await press();
	await page.locator("[name=cause_freeze]").waitFor();
	await type("cause_freeze", String(grower.freezeShare));
	await type("cause_other", String(100 - grower.freezeShare));
	await press();
	await page.locator("[name=first_harvest]").waitFor();
	await saysThatNoSuchDayIs(page, button);
	await press();
	await page.locator("[name=bud_set]").first().waitFor();
	await tabTo(page, "[name=bud_set]");
	await page.keyboard.press("Space");
	await press();
	await page.getByRole("button", { name: said[grower.language].send }).waitFor();
	await press();
	await page.getByRole("heading", { name: said[grower.language].thanks }).waitFor();
}

/** Answers by posting the same forms that a page without scripts posts. */
export async function answerByForms(link: string, grower: TestGrower): Promise<void> {
	const visitor = httpVisitor(link);
	const post = async (address: string, fields: Record<string, string>): Promise<string> => {
		const { status, location } = await visitor.post(address, fields);
		expect(`${status} ${address}`).toBe(`303 ${address}`);
		return location;
	};
	const start = await post(link, {});
	const planting = await post(start, {});
	const causes = await post(planting, {
		bearing_trees: String(grower.trees),
		normal_crop: String(grower.normalLb),
		normal_crop_unit: "lb",
		harvested: String(grower.harvestedLb),
		harvested_unit: "lb",
	});
	const days = await post(causes, {
		cause_freeze: String(grower.freezeShare),
		cause_other: String(100 - grower.freezeShare),
	});
	const buds = await post(days, {});
	const review = await post(buds, { bud_set: "light" });
	expect(await post(review, {})).toMatch(/\/receipt$/);
}
