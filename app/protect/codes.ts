/** Code of the whole network in the area tree, and of all crops in the crop tree. */
export const REGION = "network";
export const ALL_CROPS = "all";

/** Operations that answered: a quantity of every survey. */
export const RESPONDENTS = "respondents";
