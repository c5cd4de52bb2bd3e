import { plainText } from "#app/lib/closeness.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { Row } from "./cells.ts";
import { type Entry, type EntryReader, readEntry } from "./entry.ts";

export type Existing = { operationId: string; name: string; email: string | null; countyFips: string };
export type CheckedRow = {
	number: number;
	entry: Entry | null;
	problems: Problem[];
	/** The first row of the same operation; itself for most. */
	firstRow: number | null;
	/** The operation in the list that it seems to be. */
	operationId: string | null;
};

const nameKey = (entry: { name: string; countyFips: string }) => `${plainText(entry.name)}|${entry.countyFips}`;
const plantingKey = ({ planting }: Entry) => planting && `${planting.cropKey}|${plainText(planting.cultivar)}`;

/**
 * Judges all rows of a file. Rows of one name in one county are one operation with a planting each; what they tell of it
 * must agree. Each is held against the list: the same e-mail address, else the same name in the same county.
 */
export function checkRows(rows: readonly Row[], existing: readonly Existing[], reader: EntryReader): CheckedRow[] {
	const known = matcher(existing);
	const firstByName = new Map<string, CheckedRow>();
	const firstByEmail = new Map<string, CheckedRow>();
	const firstByMatch = new Map<string, CheckedRow>();
	const plantingRows = new Map<string, number>();
	return rows.map((row) => {
		const { entry, problems } = readEntry(row, reader);
		const checked: CheckedRow = { number: row.number, entry, problems, firstRow: null, operationId: null };
		if (!entry) return checked;
		const first = firstByName.get(nameKey(entry));
		if (first) joinRow(checked, first, plantingRows);
		else firstRow(checked);
		return checked;
	});

	function firstRow(checked: CheckedRow): void {
		const entry = checked.entry!;
		const { number, problems } = checked;
		checked.firstRow = number;
		firstByName.set(nameKey(entry), checked);
		plantingRows.set(`${number} ${plantingKey(entry)}`, number);
		const email = entry.email?.toLowerCase();
		const sameEmail = email ? firstByEmail.get(email) : undefined;
		if (sameEmail) problems.push({ field: "email", code: "email_twice", detail: { row: sameEmail.number } });
		else if (email) firstByEmail.set(email, checked);
		const found = known(entry);
		if (found === "several") problems.push({ field: "email", code: "operation_several_match" });
		else if (found) {
			const other = firstByMatch.get(found);
			if (other) problems.push({ field: "name", code: "match_twice", detail: { row: other.number } });
			else firstByMatch.set(found, checked);
			checked.operationId = found;
		}
		if (problems.length > 0) checked.operationId = null;
	}
}

const agreeing = ["contactName", "ownerName", "email", "phone", "language"] as const;

/** A further row of an operation: one planting more, and nothing else about it than the first row says. */
function joinRow(checked: CheckedRow, first: CheckedRow, plantingRows: Map<string, number>): void {
	const entry = checked.entry!;
	const { problems } = checked;
	checked.firstRow = first.number;
	const differs = agreeing.find((field) => entry[field] !== null && entry[field] !== first.entry![field]);
	if (differs) problems.push({ field: differs, code: "differs_from_row", detail: { row: first.number } });
	const key = `${first.number} ${plantingKey(entry)}`;
	const same = plantingRows.get(key);
	if (same !== undefined) problems.push({ field: "name", code: "row_twice", detail: { row: same } });
	else plantingRows.set(key, checked.number);
	if (first.problems.length > 0 && problems.length === 0)
		problems.push({ field: "name", code: "first_row_wrong", detail: { row: first.number } });
	checked.operationId = problems.length > 0 ? null : first.operationId;
}

const add = (map: Map<string, string[]>, key: string, id: string) => map.set(key, [...(map.get(key) ?? []), id]);

function matcher(existing: readonly Existing[]) {
	const byEmail = new Map<string, string[]>();
	const byName = new Map<string, string[]>();
	for (const operation of existing) {
		if (operation.email) add(byEmail, operation.email.toLowerCase(), operation.operationId);
		add(byName, nameKey(operation), operation.operationId);
	}
	return (entry: Entry): string | "several" | undefined => {
		const sameName = byName.get(nameKey(entry)) ?? [];
		const sameEmail = entry.email ? (byEmail.get(entry.email.toLowerCase()) ?? []) : [];
		// One person with several operations has one address: the name then tells which.
		const both = sameEmail.filter((id) => sameName.includes(id));
		const found = both.length > 0 ? both : sameEmail.length > 0 ? sameEmail : sameName;
		return found.length > 1 ? "several" : found[0];
	};
}
