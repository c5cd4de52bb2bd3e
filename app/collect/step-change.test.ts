import { expect, test } from "vitest";
import { afterWriting, judgeChange, type SentChange } from "./step-change.ts";

const sent = (more: Partial<SentChange> = {}): SentChange => ({ seen: 0, changeId: "mine", unsure: [], ...more });

test.each<[string, Parameters<typeof judgeChange>, ReturnType<typeof judgeChange>]>([
	["the first change of a step is written", [undefined, sent(), false], "write"],
	[
		"a change upon the newest version is written",
		[{ version: 3, changeId: "theirs" }, sent({ seen: 3 }), false],
		"write",
	],
	["the same change again is known", [{ version: 1, changeId: "mine" }, sent(), false], "known"],
	["a change upon an older version is not", [{ version: 1, changeId: "theirs" }, sent(), false], "changed_elsewhere"],
	["it is known where both say the same", [{ version: 1, changeId: "theirs" }, sent(), true], "known"],
	[
		"a change upon one's own, of which no answer came, is written",
		[{ version: 1, changeId: "before" }, sent({ unsure: ["before"] }), false],
		"write",
	],
	["nothing stands for a change without a name", [{ version: 1, changeId: null }, sent(), false], "changed_elsewhere"],
])("%s", (_rule, given, verdict) => {
	expect(judgeChange(...given)).toBe(verdict);
});

test("what changed nothing is counted only where an older change may still be on its way", () => {
	const newest = { version: 2, changeId: "before" };
	expect(afterWriting(newest, sent({ seen: 2 }), false)).toEqual({ version: 2, changeId: "mine" });
	expect(afterWriting(newest, sent({ seen: 2, unsure: ["late"] }), false)).toEqual({ version: 3, changeId: "mine" });
	expect(afterWriting(newest, sent({ seen: 2 }), true)).toEqual({ version: 3, changeId: "mine" });
});
