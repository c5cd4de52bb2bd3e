import { randomBytes } from "node:crypto";
import { mkdtemp, readdir, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import path from "node:path";
import { crc32, deflateSync } from "node:zlib";
import exifr from "exifr";
import type { Client } from "pg";
import type { Browser, Page } from "playwright-core";
import sharp from "sharp";
import { afterAll, afterEach, beforeAll, describe, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import { askForPhotos, answerAndSubmit, type Asked } from "#tests/database/photos-fixture.ts";
import { addPerson, connectOwner, loadPlaces, useDatabase } from "#tests/database/surveys-fixture.ts";
import { axeFindings, closePages, openBrowser, openPage, phone, signIn } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";
import { followLink, openWindow, readyForNoSignal } from "./offline/phone.ts";

let stack: Stack;
let browser: Browser;
let owner: Client;
let associate: Associate;
/** Files of the visitor's own, for those that are too large to be handed over. */
let ownFiles: string;

beforeAll(async () => {
	[stack, browser] = await Promise.all([startStack(), openBrowser()]);
	useDatabase(stack.database, { PHOTO_DIR: stack.photoFolder });
	owner = await connectOwner(stack.database.ownerUrl);
	await loadPlaces(owner);
	ownFiles = await mkdtemp(path.join(tmpdir(), "tallygrove-own-files-"));
	await writeFile(path.join(ownFiles, "huge.jpg"), Buffer.alloc(40 * 1024 * 1024, 0xff));
	await writeFile(path.join(ownFiles, "letter.jpg"), "%PDF-1.7\n1 0 obj");
	await writeFile(path.join(ownFiles, "good.jpg"), (await photo("good.jpg")).buffer);
	associate = await addPerson(owner, "Del Fenwick", ["19"]);
});
afterEach(() => closePages(browser));
afterAll(async () => {
	await browser?.close();
	await owner?.end();
	await stack?.[Symbol.asyncDispose]();
	await rm(ownFiles, { recursive: true, force: true });
});

/** Several photos are drawn and sent one after the other. */
const patient = { timeout: 20_000 };

type File = { name: string; mimeType: string; buffer: Buffer };
const jpeg = (name: string, buffer: Buffer): File => ({ name, mimeType: "image/jpeg", buffer });

/** A photo as a phone takes it, with where and when it was taken. */
async function photo(name: string, red = 120): Promise<File> {
	const background = { r: red, g: 90, b: 40 };
	const buffer = await sharp({ create: { width: 2400, height: 1800, channels: 3, background } })
		.withExif({
			IFD0: { Make: "Invented" },
			IFD3: { GPSLatitudeRef: "N", GPSLatitude: "42/1 1/1 30/1", GPSLongitudeRef: "W", GPSLongitude: "93/1 37/1 0/1" },
		})
		.jpeg()
		.toBuffer();
	expect(await exifr.gps(buffer)).toMatchObject({ latitude: expect.closeTo(42.025, 3) });
	return jpeg(name, buffer);
}

function addressesOf({ place }: Pick<Asked, "place">) {
	const survey = `${stack.baseUrl}/answer/${place.surveyId}/${place.operationId}`;
	return { survey, photos: `${survey}/ask/photos`, review: `${survey}/review` };
}

/** A phone on which the grower's link was opened, at the screen for photos. */
async function openPhotos(asked: Asked, options: Parameters<typeof openPage>[1] = {}) {
	const expiresAt = new Date(Date.now() + 86_400_000);
	const token = await scopedTransaction({ kind: "network" }, (trx) =>
		createPersonalLink(trx, { ...asked.place, expiresAt }),
	);
	const page = await openPage(browser, { ...phone, ...options });
	await followLink(page, `${stack.baseUrl}/r/${token}`);
	await page.goto(addressesOf(asked).photos);
	// The script that takes photos comes after the page, on which the camera's button stands before.
	if (options.javaScriptEnabled !== false) await page.locator("form[data-scripted]").waitFor();
	return page;
}

const box = (page: Page) => page.locator("#field-photos");
const here = (page: Page) => page.locator("#photos-here > li");
const kept = (page: Page) => page.locator("#photos-kept > li");
const complaint = (page: Page) => page.locator("#photos-problem");

async function rowsOf({ place }: Asked): Promise<{ photo_id: string; file_name: string; width_px: number }[]> {
	const { rows } = await owner.query(
		`select photo_id, file_name, width_px from collect.photo join collect.response using (response_id)
		where survey_id = $1 order by added_at`,
		[place.surveyId],
	);
	return rows;
}

describe("with scripts", () => {
	test("photos are made small, sent, listed on every page of the answers, and lose where they were taken", async () => {
		const asked = await askForPhotos(owner, associate);
		const page = await openPhotos(asked);
		const sent: number[] = [];
		page.on("request", (request) => {
			if (request.method() === "POST" && request.url().includes("/photos/"))
				sent.push(request.postDataBuffer()?.length ?? 0);
		});
		expect(await page.getByLabel("Take a photo").getAttribute("capture")).toBe("environment");
		expect((await page.getByText("Take a photo").boundingBox())!.height).toBeGreaterThanOrEqual(44);
		const file = await photo("north block.jpg");
		await box(page).setInputFiles([file, await photo("south block.jpg", 20)]);
		await expect
			.poll(() => here(page).allInnerTexts(), patient)
			.toEqual([expect.stringMatching(/^Sent\s+Remove photo 1$/), expect.stringMatching(/^Sent\s+Remove photo 2$/)]);
		expect(sent.reduce((sum, bytes) => sum + bytes, 0)).toBeLessThan(2 * file.buffer.length);
		expect(await axeFindings(page)).toEqual([]);
		const rows = await rowsOf(asked);
		expect(rows).toMatchObject([{ width_px: 1600 }, { width_px: 1600 }]);
		for (const { file_name: name } of rows) {
			const stored = await readFile(path.join(stack.photoFolder, `${name}.jpg`));
			expect(await exifr.parse(stored, true).catch(() => undefined)).toBeUndefined();
		}
		await page.getByRole("button", { name: "Continue" }).click();
		await page.waitForURL(/\/ask\/note/);
		await page.goto(addressesOf(asked).review);
		const pictures = page.getByRole("list", { name: "2 photos" }).getByRole("img");
		await expect.poll(() => pictures.count(), patient).toBe(2);
		expect(
			await pictures.first().evaluate((image: HTMLImageElement) => image.decode().then(() => image.naturalWidth)),
		).toBe(320);
		expect(await axeFindings(page)).toEqual([]);
		expect(page.complaints).toEqual([]);
	});

	test("without signal photos stay on the phone, also when the window is closed, and are sent when signal is back", async () => {
		const asked = await askForPhotos(owner, associate);
		const page = await openPhotos(asked);
		const context = page.context();
		await context.setOffline(true);
		await box(page).setInputFiles([await photo("one.jpg"), await photo("two.jpg", 20)]);
		await expect
			.poll(() => here(page).allInnerTexts(), patient)
			.toEqual([
				expect.stringMatching(/^Kept on this phone\. It is sent when there is signal\./),
				expect.stringMatching(/^Kept on this phone\. It is sent when there is signal\./),
			]);
		expect(await rowsOf(asked)).toEqual([]);
		await page.close();
		await context.setOffline(false);
		// Another screen of the survey is enough.
		await openWindow(context, `${addressesOf(asked).survey}/ask/night`);
		await expect.poll(async () => (await rowsOf(asked)).length, patient).toBe(2);
		const again = await openWindow(context, addressesOf(asked).photos);
		expect(await kept(again).count()).toBe(2);
		expect(await here(again).count()).toBe(0);
	});

	test("a screen that the phone draws itself takes photos too", async () => {
		const asked = await askForPhotos(owner, associate);
		const page = await openPhotos(asked);
		await readyForNoSignal(page);
		await page.context().setOffline(true);
		await page.goto(addressesOf(asked).photos);
		await page.getByText("There is no signal. You can go on", { exact: false }).waitFor();
		await box(page).setInputFiles(await photo("one.jpg"));
		await here(page).getByText("Kept on this phone", { exact: false }).waitFor();
		await page.getByRole("button", { name: "Continue" }).click();
		await page.waitForURL(/\/ask\/note/);
		expect(await rowsOf(asked)).toEqual([]);
		await page.context().setOffline(false);
		await page.goto(`${addressesOf(asked).survey}/ask/note`);
		await expect.poll(async () => (await rowsOf(asked)).length, patient).toBe(1);
	});

	test("a photo that breaks off goes on where it stopped", async () => {
		const asked = await askForPhotos(owner, associate);
		// The worker would send it too, unseen by the test.
		const page = await openPhotos(asked, { serviceWorkers: "block" });
		const offsets: number[] = [];
		await page.route(/\/photos\//, (route) => {
			if (route.request().method() !== "POST") return route.continue();
			offsets.push(Number(new URL(route.request().url()).searchParams.get("offset")));
			return offsets.length === 3 ? route.abort("internetdisconnected") : route.continue();
		});
		// Grain does not shrink, so that it takes several pieces.
		const grain = await sharp(randomBytes(1200 * 900 * 3), { raw: { width: 1200, height: 900, channels: 3 } })
			.jpeg()
			.toBuffer();
		await box(page).setInputFiles(jpeg("grain.jpg", grain));
		await here(page).getByText("Kept on this phone", { exact: false }).waitFor();
		await page.evaluate(() => window.dispatchEvent(new Event("online")));
		await here(page).getByText("Sent", { exact: true }).waitFor();
		// Begun anew with the first piece, which tells how far the photo had come: the second is not sent again.
		const [first, second, third, fourth, fifth] = offsets;
		expect([first, fourth]).toEqual([0, 0]);
		expect(second).toBeGreaterThan(0);
		expect(fifth).toBe(third);
	});

	test("what cannot be taken is refused on the phone, in words beside the box", async () => {
		const asked = await askForPhotos(owner, associate);
		const page = await openPhotos(asked);
		await box(page).setInputFiles(["huge.jpg", "letter.jpg"].map((name) => path.join(ownFiles, name)));
		await expect
			.poll(() => complaint(page).innerText(), patient)
			.toMatch(/huge\.jpg: A photo can be 15 megabytes at most.*letter\.jpg: This file is not a photo/s);
		for (let i = 0; i < 6; i++) await box(page).setInputFiles(await photo(`${i}.jpg`, i));
		await expect.poll(() => complaint(page).innerText(), patient).toMatch(/5\.jpg: There can be 5 photos at most/);
		await expect.poll(async () => (await rowsOf(asked)).length, patient).toBe(5);
		expect(await here(page).count()).toBe(5);
		expect(await axeFindings(page)).toEqual([]);
	});

	test("a photo can be removed and brought back, and one from before is asked about first", async () => {
		const asked = await askForPhotos(owner, associate);
		const page = await openPhotos(asked);
		await box(page).setInputFiles(await photo("one.jpg"));
		await here(page).getByText("Sent", { exact: true }).waitFor();
		await page.getByRole("button", { name: "Remove photo 1" }).click();
		await here(page).getByText("The photo is removed.").waitFor();
		await expect.poll(() => rowsOf(asked), patient).toEqual([]);
		await page.getByRole("button", { name: "Bring it back" }).click();
		await here(page).getByText("Sent", { exact: true }).waitFor();
		expect((await rowsOf(asked)).length).toBe(1);
		await page.reload();
		await page.getByText("Remove photo 1").click();
		await page.getByRole("button", { name: "Yes, remove it" }).click();
		await expect.poll(() => rowsOf(asked), patient).toEqual([]);
		// The server has done it a moment before the page is told.
		await expect.poll(() => kept(page).count(), patient).toBe(0);
		expect(page.complaints).toEqual([]);
	});
});

const words = {
	en: {
		add: "Add these photos",
		big: /A photo can be 15 megabytes at most/,
		pdf: /This file is not a photo/,
		bomb: /more dots than can be read/,
		many: /There can be 5 photos at most/,
		remove: "Remove photo 1",
		yes: "Yes, remove it",
	},
	es: {
		add: "Agregar estas fotos",
		big: /Una foto puede tener 15 megabytes como máximo/,
		pdf: /Este archivo no es una foto/,
		bomb: /más puntos de los que se pueden leer/,
		many: /Puede haber 5 fotos como máximo/,
		remove: "Quitar la foto 1",
		yes: "Sí, quitarla",
	},
};

function pngChunk(name: string, data: Buffer): Buffer {
	const body = Buffer.concat([Buffer.from(name), data]);
	const [length, sum] = [Buffer.alloc(4), Buffer.alloc(4)];
	length.writeUInt32BE(data.length);
	sum.writeUInt32BE(crc32(body));
	return Buffer.concat([length, body, sum]);
}

/** A small PNG of a quarter of a thousand million dots. */
function bomb(): Buffer {
	const side = 16_000;
	const header = Buffer.alloc(13);
	header.writeUInt32BE(side, 0);
	header.writeUInt32BE(side, 4);
	header.set([1, 0, 0, 0, 0], 8);
	const rows = deflateSync(Buffer.alloc(side * (1 + side / 8)));
	const parts = [pngChunk("IHDR", header), pngChunk("IDAT", rows), pngChunk("IEND", Buffer.alloc(0))];
	return Buffer.concat([Buffer.from("\x89PNG\r\n\x1a\n", "latin1"), ...parts]);
}

describe.each(["en", "es"] as const)("without scripts, in %s", (language) => {
	const said = words[language];
	const openPlain = (asked: Asked) =>
		openPhotos(asked, { javaScriptEnabled: false, language: language === "es" ? "es-MX" : "en-US" });

	test("photos go with the form, are shown when it comes back, and can be removed", async () => {
		const asked = await askForPhotos(owner, associate, { language });
		const page = await openPlain(asked);
		// The browser's own boxes for files are wide, and must not push the page sideways.
		for (const input of await page.locator("input[type=file]").all()) {
			const { x, width } = (await input.boundingBox())!;
			expect(x + width).toBeLessThanOrEqual(375);
		}
		await box(page).setInputFiles([await photo("one.jpg"), await photo("two.jpg", 20)]);
		await page.getByRole("button", { name: said.add }).click();
		await expect.poll(() => kept(page).count(), patient).toBe(2);
		await page.getByText(said.remove).click();
		await page.getByRole("button", { name: said.yes }).click();
		await expect.poll(() => kept(page).count(), patient).toBe(1);
		// Going on keeps what was chosen too.
		await box(page).setInputFiles(await photo("three.jpg", 60));
		await page.locator("button[data-on]").click();
		await page.waitForURL(/\/ask\/note/);
		expect((await rowsOf(asked)).length).toBe(2);
	});

	test("40 MB, a letter called .jpg, a bomb and a sixth photo are refused in words, and the others kept", async () => {
		const asked = await askForPhotos(owner, associate, { language });
		const page = await openPlain(asked);
		const send = async (...files: File[] | string[]) => {
			await box(page).setInputFiles(files as File[]);
			await page.getByRole("button", { name: said.add }).click();
		};
		await send(...["good.jpg", "huge.jpg"].map((name) => path.join(ownFiles, name)));
		await complaint(page).getByText(said.big).waitFor();
		expect(await kept(page).count()).toBe(1);
		await send(jpeg("letter.jpg", Buffer.from("%PDF-1.7\n1 0 obj")), await photo("also.jpg", 20));
		await complaint(page).getByText(said.pdf).waitFor();
		expect(await kept(page).count()).toBe(2);
		await send({ name: "bomb.png", mimeType: "image/png", buffer: bomb() });
		await complaint(page).getByText(said.bomb).waitFor();
		await send(...(await Promise.all([1, 2, 3, 4].map((red) => photo(`${red}.jpg`, red)))));
		await complaint(page).getByText(said.many).waitFor();
		expect(await kept(page).count()).toBe(5);
		expect((await rowsOf(asked)).length).toBe(5);
		const files = await readdir(stack.photoFolder);
		for (const { file_name: name } of await rowsOf(asked)) expect(files).toContain(`${name}.jpg`);
	});
});

/** What a signed-in person may do, from then on. */
async function grant(subject: string, role: "associate" | "grower", what: { state?: string; operation?: string }) {
	await owner.query(
		`insert into auth.role_grant (person_id, role, state_fips, operation_id)
		select person_id, $2, $3, $4 from auth.person where subject = $1`,
		[subject, role, what.state ?? null, what.operation ?? null],
	);
}

test("a photo is its grower's and the state's associates', and not found by anybody else", async () => {
	const asked = await askForPhotos(owner, associate);
	const page = await openPhotos(asked);
	await box(page).setInputFiles(await photo("one.jpg"));
	await here(page).getByText("Sent", { exact: true }).waitFor();
	expect(await answerAndSubmit(asked)).toMatchObject({ outcome: "submitted" });
	const photoId = (await rowsOf(asked))[0]!.photo_id;
	const address = `${addressesOf(asked).survey}/photos/${photoId}`;
	const own = await page.request.get(address);
	expect(own.status()).toBe(200);
	expect(own.headers()).toMatchObject({
		"content-type": "image/jpeg",
		"x-content-type-options": "nosniff",
		"cache-control": "private, no-cache",
	});
	const again = await page.request.get(address, { headers: { "if-none-match": own.headers().etag! } });
	expect(again.status()).toBe(304);
	const neighbor = await openPhotos(await askForPhotos(owner, associate));
	expect((await neighbor.request.get(address)).status()).toBe(404);
	const stranger = await openPage(browser);
	expect((await stranger.request.get(address)).status()).toBe(401);

	const { surveyId, operationId } = asked.place;
	const responses = `${stack.baseUrl}/desk/surveys/${surveyId}/responses`;
	const { rows } = await owner.query("select response_id from collect.response where survey_id = $1", [surveyId]);
	const atDesk = `${responses}/${rows[0].response_id}`;
	const [del, ines, grower] = [await openPage(browser), await openPage(browser), await openPage(browser, phone)];
	await signIn(del, stack.baseUrl, "Del Fenwick");
	await signIn(ines, stack.baseUrl, "Ines Quintana");
	await signIn(grower, stack.baseUrl, "Theo Brandvold");
	await grant("demo-del-fenwick", "associate", { state: "19" });
	await grant("demo-ines-quintana", "associate", { state: "55" });
	await grant("demo-theo-brandvold", "grower", { operation: operationId });
	await del.goto(atDesk);
	const picture = del.getByRole("img", { name: "Photo 1" });
	await expect.poll(() => picture.evaluate((image: HTMLImageElement) => image.naturalWidth), patient).toBe(320);
	expect(await axeFindings(del)).toEqual([]);
	expect((await ines.request.get(`${atDesk}/photos/${photoId}`)).status()).toBe(404);
	expect((await ines.request.get(address)).status()).toBe(404);
	await grower.goto(`${stack.baseUrl}/orchard/${operationId}/answers/${surveyId}`);
	const whole = grower.getByRole("link", { name: "Photo 1" });
	expect((await grower.request.get(stack.baseUrl + (await whole.getAttribute("href")))).status()).toBe(200);
	const foreign = `${stack.baseUrl}/orchard/${operationId}/answers/${surveyId}/photos/${photoId}`;
	expect((await neighbor.request.get(foreign)).status()).toBe(401);
});
