/** Everything that is logged, by subject. Each has its words in `network:log.action.<subject>.<verb>`. */
export const logActions = {
	auth: ["signed_in", "sign_in_failed"],
	grant: ["first_coordinator", "given", "end_set", "ended", "revoked"],
	invitation: ["sent", "sent_again", "withdrawn", "accepted"],
	access: ["requested", "approved", "declined"],
	survey: [
		"created",
		"changed",
		"discarded",
		"copied",
		"archived",
		"taken_out",
		"opened",
		"extended",
		"closed",
		"invited",
		"reminders_set",
		"reminded",
		"link_replaced",
		"form_changed",
		"weighted",
		"rehearsed",
		"rehearsal_discarded",
	],
	form: ["created", "published", "dropped"],
	operation: [
		...(["moved", "left", "mail_stopped", "mail_resumed", "address_mended"] as const),
		...(["language_set", "tried_anew", "exported", "merged", "merge_undone", "edited"] as const),
		...(["added", "planting_kept"] as const),
		...(["publication_allowed", "publication_disallowed"] as const),
	],
	import: ["finished", "undone"],
	response: ["started", "submitted", "amended", "withdrawn", "taken_in", "left_out"],
	finding: ["confirmed", "corrected", "set_aside", "reopened", "asked", "replied", "coded"],
	release: ["drafted", "cancelled", "rejected", "scheduled", "unscheduled", "published", "withdrawn"],
	settings: ["changed"],
	key: ["made", "revoked"],
	report: [
		"started",
		"submitted",
		"sent_back",
		"scheduled",
		"unscheduled",
		"published",
		"corrected",
		"photo_added",
		"photo_taken_away",
	],
	district: ["redrawn", "put_back"],
	log: ["exported"],
} as const;

type Actions = typeof logActions;
/** `subject.verb`, as in `survey.opened`. */
export type LogAction = { [Subject in keyof Actions]: `${Subject}.${Actions[Subject][number]}` }[keyof Actions];
export type LogSubject = keyof Actions;
export const logSubjects = Object.keys(logActions) as LogSubject[];
