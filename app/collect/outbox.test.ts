import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import {
	answered,
	awaitsReceipt,
	emptyOutbox,
	type KeptAnswer,
	letGo,
	listUnsettled,
	markSentIn,
	nextToSend,
	type Outbox,
	refused,
	sending,
	sentChange,
	settle,
	type,
	typedStep,
} from "./outbox.ts";
import { afterWriting, judgeChange, type SentChange, type StepChange } from "./step-change.ts";

const typed = (changeId: string, from: string | null, seen = 0) =>
	({ values: { box: changeId }, language: "en", seen, changeId, from }) as const;
const typedInto = (outbox: Outbox, ...said: ReturnType<typeof typed>[]) =>
	said.reduce((before, one) => type(before, "a", one).outbox, outbox);
const yes = (version: number, unread: string[] = []): KeptAnswer => ({ kept: true, version, unread });
const no = (version: number): KeptAnswer => ({ kept: false, version, unread: [] });

describe("one phone's outbox", () => {
	test("steps are sent in the order in which they were last typed", () => {
		let outbox = type(emptyOutbox, "a", typed("1", null)).outbox;
		outbox = type(outbox, "b", typed("2", null)).outbox;
		outbox = type(outbox, "a", typed("3", "1")).outbox;
		expect(nextToSend(outbox)).toBe("b");
		outbox = answered(sending(outbox, "b"), "b", "2", yes(1));
		expect(nextToSend(outbox)).toBe("a");
		expect(listUnsettled(outbox)).toEqual(["a"]);
	});

	test("answers that were sent in without a page await their receipt, until something is typed again", () => {
		const kept = answered(typedInto(emptyOutbox, typed("1", null)), "a", "1", yes(1));
		expect(awaitsReceipt(kept)).toBe(false);
		const sent = markSentIn({ ...kept, sendIn: true });
		expect(sent.sendIn).toBe(false);
		expect(awaitsReceipt(sent)).toBe(true);
		expect(awaitsReceipt(typedInto(sent, typed("2", "1")))).toBe(false);
		expect(awaitsReceipt(answered(typedInto(sent, typed("2", "1")), "a", "2", yes(2)))).toBe(false);
	});

	test("what another page of the same phone typed is not overwritten while the server lacks it", () => {
		const outbox = typedInto(emptyOutbox, typed("1", null));
		const second = type(outbox, "a", typed("2", null));
		expect(second.outcome).toBe("typed_here");
		expect(typedStep(second.outbox, "a")?.changeId).toBe("1");
		const kept = answered(sending(outbox, "a"), "a", "1", yes(1));
		// Typed upon version 0: the server will tell that there is a newer one.
		expect(typedStep(type(kept, "a", typed("2", null)).outbox, "a")).toMatchObject({ changeId: "2", seen: 0 });
	});

	test("what could not be read stays on the phone, and is not sent again until it is typed again", () => {
		const sent = sending(typedInto(emptyOutbox, typed("1", null)), "a");
		const outbox = answered(sent, "a", "1", yes(1, ["box"]));
		expect(nextToSend(outbox)).toBeUndefined();
		expect(listUnsettled(outbox)).toEqual(["a"]);
		expect(settle(outbox, { a: { version: 1, changeId: "1" } })).toEqual(outbox);
		expect(typedStep(typedInto(outbox, typed("2", "1")), "a")).toMatchObject({ seen: 1, state: "waiting" });
	});

	test("going on keeps all or nothing, so its change at the server is the whole step", () => {
		const outbox = typedInto(emptyOutbox, typed("1", null));
		const there = { a: { version: 1, changeId: "1" } };
		expect(settle(sending(outbox, "a", { goneOn: true }), there).steps).toEqual({});
		// Sent while it was typed, part of it may have been left out, and only the answer tells.
		expect(nextToSend(settle(sending(outbox, "a"), there))).toBe("a");
	});

	test("a conflict is not sent again by itself; the grower's choice is", () => {
		const outbox = answered(sending(typedInto(emptyOutbox, typed("1", null)), "a"), "a", "1", no(4));
		expect(nextToSend(outbox)).toBeUndefined();
		const mine = typedInto(outbox, typed("2", "1", 4));
		expect([nextToSend(mine), typedStep(mine, "a")?.seen]).toEqual(["a", 4]);
		expect(listUnsettled(letGo(outbox, "a"))).toEqual([]);
	});

	test("what the server will never take does not hold up the rest", () => {
		let outbox = typedInto(emptyOutbox, typed("1", null));
		outbox = type(outbox, "b", typed("2", null)).outbox;
		outbox = refused(outbox, "a", "1");
		expect([nextToSend(outbox), listUnsettled(outbox)]).toEqual(["b", ["a", "b"]]);
	});
});

/* Phones, a network that loses, repeats, delays and reorders, and the server's own rule of what it writes. */
type Request = { phone: number; change: SentChange & { changeId: string }; value: number };
type Answer = { phone: number; changeId: string; answer: KeptAnswer };
type Phone = {
	outbox: Outbox;
	from: string | null;
	seen: number; /** Versions that its page has shown. */
	knows: Set<number>;
	lastTyped: number;
};
type World = {
	server: { newest: StepChange | undefined; value: number };
	phones: Phone[];
	requests: Request[];
	answers: Answer[];
	typed: number;
};

const newWorld = (phones: number): World => ({
	server: { newest: undefined, value: 0 },
	phones: Array.from({ length: phones }, () => ({
		outbox: emptyOutbox,
		from: null,
		seen: 0,
		knows: new Set([0]),
		lastTyped: 0,
	})),
	requests: [],
	answers: [],
	typed: 0,
});

const actions = {
	/** Types a new number, or the one that the server has, as one does who changes one's mind. */
	type(world: World, at: number, back: boolean) {
		const phone = world.phones[at]!;
		const value = back ? world.server.value : ++world.typed;
		const changeId = `${at}-${value}-${phone.outbox.count}`;
		const { from, seen } = phone;
		const next = type(phone.outbox, "a", { values: { box: String(value) }, language: "en", seen, changeId, from });
		phone.knows.add(value);
		if (next.outcome === "typed") Object.assign(phone, { outbox: next.outbox, from: changeId, lastTyped: value });
	},
	send(world: World, at: number) {
		const phone = world.phones[at]!;
		if (nextToSend(phone.outbox) === undefined) return;
		phone.outbox = sending(phone.outbox, "a");
		const step = typedStep(phone.outbox, "a")!;
		const change = { ...sentChange(step), changeId: step.changeId };
		world.requests.push({ phone: at, change, value: Number(step.values.box) });
	},
	arrive(world: World, at: number, again: boolean) {
		const [request] = world.requests.splice(at % Math.max(1, world.requests.length), 1);
		if (!request) return;
		if (again) world.requests.push(request);
		world.answers.push(serve(world, request));
	},
	lose(world: World, at: number) {
		world.requests.splice(at % Math.max(1, world.requests.length), 1);
	},
	hear(world: World, at: number, again: boolean) {
		const [heard] = world.answers.splice(at % Math.max(1, world.answers.length), 1);
		if (!heard) return;
		if (again) world.answers.push(heard);
		const phone = world.phones[heard.phone]!;
		phone.outbox = answered(phone.outbox, "a", heard.changeId, heard.answer);
		const step = typedStep(phone.outbox, "a");
		// The page follows what its own changes have made of the step.
		if (step?.changeId === phone.from) phone.seen = Math.max(phone.seen, step!.seen);
	},
	deaf(world: World, at: number) {
		world.answers.splice(at % Math.max(1, world.answers.length), 1);
	},
	/** Closes the page and opens it again: it shows what the server has, or over it what the phone still holds. */
	reopen(world: World, at: number) {
		const phone = world.phones[at]!;
		const { newest } = world.server;
		phone.outbox = settle(phone.outbox, newest ? { a: newest } : {});
		const held = typedStep(phone.outbox, "a");
		phone.from = held && held.state !== "kept" ? held.changeId : null;
		phone.seen = phone.from === null ? (newest?.version ?? 0) : held!.seen;
		if (phone.from === null) phone.knows.add(world.server.value);
	},
	/** Looks at both sides of a conflict and keeps one's own, or takes the other. */
	choose(world: World, at: number, mine: boolean) {
		const phone = world.phones[at]!;
		const held = typedStep(phone.outbox, "a");
		if (held?.state !== "changed_elsewhere") return;
		if (!mine) {
			phone.outbox = letGo(phone.outbox, "a");
			actions.reopen(world, at);
			return;
		}
		phone.knows.add(world.server.value);
		phone.from = held.changeId;
		phone.seen = world.server.newest!.version;
		actions.type(world, at, false);
	},
};

/** The server's part of `keepStep`, with one number for all that a step holds. */
function serve(world: World, { phone, change, value }: Request): Answer {
	const { server } = world;
	const verdict = judgeChange(server.newest, change, value === server.value);
	if (verdict === "write") {
		// Nobody's answer is written over by one who has not seen it.
		expect(world.phones[phone]!.knows).toContain(server.value);
		const next = afterWriting(server.newest, change, value !== server.value);
		Object.assign(server, { newest: next, value });
	}
	const answer = { kept: verdict !== "changed_elsewhere", version: server.newest?.version ?? 0, unread: [] };
	return { phone, changeId: change.changeId, answer };
}

const action = fc.tuple(
	fc.constantFrom(...(Object.keys(actions) as (keyof typeof actions)[])),
	fc.nat(5),
	fc.boolean(),
);
/** What was typed twice alike was sent twice, each time unsure of something else, and what was sent first arrives last. */
const repeatedUnderWay: [keyof typeof actions, number, boolean][] = [
	["type", 0, true],
	["send", 0, false],
	["send", 0, false],
	["send", 0, false],
	["send", 0, false],
	["type", 0, true],
	["send", 0, false],
	["lose", 0, false],
	["arrive", 0, false],
	["hear", 0, false],
	["send", 0, false],
	["type", 0, false],
	["arrive", 3, false],
];
const history = fc.array(action, { maxLength: 60, size: "max" });

function run(phones: number, steps: [keyof typeof actions, number, boolean][], check: (world: World) => void): World {
	const world = newWorld(phones);
	for (const [name, at, flag] of steps) {
		const ofPhone = name === "type" || name === "send" || name === "reopen" || name === "choose";
		actions[name](world, ofPhone ? at % phones : at, flag);
		check(world);
	}
	return world;
}

/** Lets everything that is under way arrive, and each phone send what it has. */
function calm(world: World): void {
	while (world.requests.length > 0) actions.arrive(world, 0, false);
	while (world.answers.length > 0) actions.hear(world, 0, false);
	for (const at of world.phones.keys()) {
		actions.send(world, at);
		actions.arrive(world, 0, false);
		actions.hear(world, 0, false);
	}
}

describe("whatever the network does", () => {
	test("a phone's newest answer stays the newest, and no device is blamed that is not there", () => {
		fc.assert(
			fc.property(history, (steps) => {
				const world = run(1, steps, ({ phones: [phone], server }) => {
					const held = typedStep(phone!.outbox, "a");
					expect(held?.state).not.toBe("changed_elsewhere");
					if (held?.state === "kept") expect(server.value).toBe(Number(held.values.box));
				});
				calm(world);
				const [phone] = world.phones;
				expect(listUnsettled(phone!.outbox)).toEqual([]);
				expect(world.server.value).toBe(phone!.lastTyped);
			}),
			{ numRuns: 1500, examples: [[repeatedUnderWay]] },
		);
	}, 60_000);

	test("two phones never write over what they have not seen, and whoever was kept is told when that ends", () => {
		fc.assert(
			fc.property(history, (steps) => {
				const world = run(2, steps, () => {});
				calm(world);
				for (const { outbox, lastTyped } of world.phones) {
					const held = typedStep(outbox, "a");
					expect(held?.state ?? "kept").toMatch(/^(kept|changed_elsewhere)$/);
					// What is not at the server is still on the phone.
					if (held?.state === "changed_elsewhere") expect(Number(held.values.box)).toBe(lastTyped);
				}
			}),
			{ numRuns: 1500 },
		);
	}, 60_000);
});
