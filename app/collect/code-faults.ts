import type { Fault, Placed } from "./condition-faults.ts";
import type { Question } from "./form.ts";

type Codes = NonNullable<Extract<Question, { type: "short_text" }>["codes"]>;

/**
 * What would leave words without a code, or count them where nobody answered: shares and options that are not there, or
 * that are asked of plantings where the words are not.
 */
export function* codeFaults({ question, screen, path }: Placed, byKey: Map<string, Placed>): Generator<Fault> {
	if (question.type !== "short_text" || !question.codes) return;
	const fault = (message: string): Fault => ({ path: [...path, "codes"], message: `"${question.key}" ${message}` });
	const { codes } = question;
	const first = byKey.get(targetOf(codes));
	if (first && first.screen.perPlanting !== screen.perPlanting)
		yield fault(`and "${targetOf(codes)}", as which it counts, are not both asked of each planting`);
	if ("adds" in codes) {
		if (first?.question.type !== "several") yield fault(`adds to "${codes.adds}", which has no options to choose from`);
		return;
	}
	if (first?.question.type !== "percent") {
		yield fault(`moves "${codes.moves}", which is no percent question`);
		return;
	}
	for (const key of codes.to) {
		const other = byKey.get(key);
		if (key === codes.moves || other?.question.type !== "percent" || other.screen !== first.screen)
			yield fault(`moves to "${key}", which is no other percent question of the screen of "${codes.moves}"`);
	}
}

function targetOf(codes: Codes): string {
	return "adds" in codes ? codes.adds : codes.moves;
}
