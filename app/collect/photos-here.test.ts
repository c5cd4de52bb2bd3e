import { expect, test } from "vitest";
import { emptyOutbox, letGo, listUnsettled, settle, type } from "./outbox.ts";
import { tooMany } from "./photo.ts";
import { nextPhoto, withoutPhoto, withPhoto, withRefusedPhoto } from "./photos-here.ts";

const photo = (photoId: string) => ({
	photoId,
	stepKey: "photos",
	questionKey: "photos",
	sizeBytes: 10,
	problem: null,
});
const two = withPhoto(withPhoto(emptyOutbox, photo("a")), photo("b"));

test("photos are sent in the order in which they were taken, each until the server has it", () => {
	expect(nextPhoto(two)?.photoId).toBe("a");
	expect(nextPhoto(withPhoto(two, photo("b")))?.photoId).toBe("a");
	expect(nextPhoto(withoutPhoto(two, "a"))?.photoId).toBe("b");
	expect(nextPhoto(withoutPhoto(withoutPhoto(two, "a"), "b"))).toBeUndefined();
});

test("one that is refused holds up no other, and waits for its grower", () => {
	const outbox = withRefusedPhoto(two, "a", tooMany);
	expect(nextPhoto(outbox)?.photoId).toBe("b");
	expect(listUnsettled(withoutPhoto(outbox, "b"))).toEqual(["photos"]);
	expect(listUnsettled(withoutPhoto(withoutPhoto(outbox, "b"), "a"))).toEqual([]);
});

test("a screen with photos on their way is not settled, whatever becomes of what is typed on it", () => {
	const typed = { values: {}, language: "en", seen: 0, changeId: "1", from: null } as const;
	const outbox = type(two, "photos", typed).outbox;
	expect(listUnsettled(outbox)).toEqual(["photos"]);
	expect(listUnsettled(letGo(outbox, "photos"))).toEqual(["photos"]);
	expect(settle(outbox, { photos: { version: 1, changeId: "1" } }).photos).toEqual(two.photos);
});
