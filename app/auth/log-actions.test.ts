import { expect, test } from "vitest";
import { resources } from "#app/i18n/resources.ts";
import { logActions, logSubjects } from "./log-actions.ts";

test("everything that is logged has words in both languages, and no words stand for what is not", () => {
	const known = Object.fromEntries(logSubjects.map((subject) => [subject, [...logActions[subject]].toSorted()]));
	for (const { network } of [resources.en, resources.es]) {
		const said = Object.entries(network.log.action).map(([subject, words]) => [subject, Object.keys(words).toSorted()]);
		expect(Object.fromEntries(said)).toEqual(known);
	}
});
