/** What a county or its equal is called beside its own name; `bare` needs no word. */
export type CountyKind =
	"county" | "parish" | "borough" | "city_and_borough" | "census_area" | "municipality" | "city" | "bare";

const kindsInAlaska: Record<string, CountyKind> = {
	"02016": "census_area",
	"02020": "municipality",
	"02050": "census_area",
	"02063": "census_area",
	"02066": "census_area",
	"02070": "census_area",
	"02105": "census_area",
	"02110": "city_and_borough",
	"02158": "census_area",
	"02180": "census_area",
	"02198": "census_area",
	"02220": "city_and_borough",
	"02230": "municipality",
	"02240": "census_area",
	"02261": "census_area",
	"02275": "city_and_borough",
	"02282": "city_and_borough",
	"02290": "census_area",
};

/**
 * Told by the FIPS code, since neither the atlas nor the directory holds it. Codes from 510 on are cities that belong to no
 * county. Carson City and the District of Columbia have the word in their name.
 * Source: Census Bureau, legal/statistical area descriptions of the county boundaries of 2017, the atlas's own edition.
 */
export function countyKind(countyFips: string): CountyKind {
	const [state, place] = [countyFips.slice(0, 2), Number(countyFips.slice(2))];
	if (countyFips === "11001" || countyFips === "32510") return "bare";
	if (state === "22") return "parish";
	if (state === "02") return kindsInAlaska[countyFips] ?? "borough";
	return place >= 510 && ["24", "29", "51"].includes(state) ? "city" : "county";
}
