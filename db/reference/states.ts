/** The states that the network covers, with the time zone in which their surveys close. */
export const states = [
	{ stateFips: "17", name: "Illinois", postal: "IL", timeZone: "America/Chicago" },
	{ stateFips: "19", name: "Iowa", postal: "IA", timeZone: "America/Chicago" },
	{ stateFips: "27", name: "Minnesota", postal: "MN", timeZone: "America/Chicago" },
	{ stateFips: "55", name: "Wisconsin", postal: "WI", timeZone: "America/Chicago" },
] as const;
