import type { TFunction } from "i18next";
import { countyKind } from "#app/lib/county-kind.ts";

/** A county where it stands alone, by what it is called there: "Story County, Iowa", "Orleans Parish, Louisiana". */
export function countyName(t: TFunction, { name, countyFips }: { name: string; countyFips: string }): string {
	const state = t(`common:state.${countyFips.slice(0, 2)}`);
	return t(`common:countyNamed.${countyKind(countyFips)}`, { name, state });
}
