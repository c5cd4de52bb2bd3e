/** The option under which growers tell in words what a list lacks. Its words can be given a code; it is none itself. */
export const otherKey = "other";
