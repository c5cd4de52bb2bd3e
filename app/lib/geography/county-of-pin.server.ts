import { countyFeatures } from "./counties.ts";
import { countyFinder, type Pin } from "./pin.ts";
import { usTopology } from "./topology.server.ts";

let find: ((pin: Pin) => string | null) | undefined;

/** The FIPS code of the county in which a pin lies, or null outside the country's counties. */
export function countyOfPin(pin: Pin): string | null {
	find ??= countyFinder(countyFeatures(usTopology()).features);
	return find(pin);
}
