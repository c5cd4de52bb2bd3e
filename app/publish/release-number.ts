import { z } from "zod";

/** A release's number as addresses have it: in one way only, so that a release has one address. */
export const ReleaseNumber = z
	.string()
	.regex(/^[1-9]\d{0,8}$/)
	.transform(Number);
