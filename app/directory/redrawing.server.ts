import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { type DistrictsForm, typedOf } from "./districts.schema.ts";
import { redrawDistricts, type StateDistricts, undoRedrawing } from "./districts.server.ts";
import { type DistrictNames, districtProblems } from "./districts.ts";

/** The names of a state's districts as they are. */
export const namesNow = ({ counties }: Pick<StateDistricts, "counties">): DistrictNames =>
	new Map(counties.flatMap(({ countyFips, district }) => (district === null ? [] : [[countyFips, district] as const])));

/** The names as they were typed, with what is wrong with them; "not_found" where a county is not of the state. */
export function readTyped(
	state: StateDistricts,
	form: DistrictsForm,
): { names: DistrictNames; problems: Problem[] } | "not_found" {
	const names = new Map(Object.entries(typedOf(form)));
	const known = new Set(state.counties.map(({ countyFips }) => countyFips));
	if ([...names.keys()].some((county) => !known.has(county))) return "not_found";
	return { names, problems: form.decision === "undo" ? [] : districtProblems(names, state.neighborsOf) };
}

/** Groups a state's counties as typed, or as they were before the last change, and writes that into the log. */
export async function carryOut(
	trx: Trx,
	viewer: Associate | Coordinator,
	stateFips: string,
	{ decision, seen, names }: Pick<DistrictsForm, "decision" | "seen"> & { names: DistrictNames },
) {
	const outcome =
		decision === "undo"
			? await undoRedrawing(trx, viewer, stateFips, seen)
			: await redrawDistricts(trx, viewer, { stateFips, names, seen });
	if (outcome === "redrawn")
		await logEvent(trx, {
			personId: viewer.personId,
			action: decision === "undo" ? "district.put_back" : "district.redrawn",
			subjectKind: "state",
			subjectId: stateFips,
			stateFips,
		});
	return outcome;
}
