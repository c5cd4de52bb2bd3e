import { data } from "react-router";

/** Every way in which the product says no, with its HTTP status. The words for each are `common:error.<code>`. */
const statusOf = {
	sign_in_needed: 401,
	link_not_valid: 404,
	stop_link_not_valid: 404,
	link_session_over: 401,
	survey_closed: 410,
	role_needed: 403,
	other_person: 412,
	page_not_found: 404,
	survey_not_found: 404,
	form_not_found: 404,
	operation_not_found: 404,
	import_not_found: 404,
	orchard_not_found: 404,
	response_not_found: 404,
	finding_not_found: 404,
	release_not_found: 404,
	release_withdrawn: 410,
	report_not_found: 404,
	request_not_found: 404,
	grant_not_found: 404,
	invitation_not_valid: 404,
	too_much_text: 413,
	too_many_tries: 429,
	form_not_understood: 400,
	method_not_allowed: 405,
	service_away: 503,
} as const;
export type RefusalCode = keyof typeof statusOf;
/** A form as it was sent, and whose page it was sent from. */
export type PostedForm = { holder: string; fields: { place: number; name: string; value: string }[] };
export type Refusal = { code: RefusalCode; role?: string; posted?: PostedForm | "lost" };

/** What a loader or action throws to refuse; the error page shows it in the reader's words. Holds nothing secret from its reader. */
export function refusal(code: RefusalCode, detail: Omit<Refusal, "code"> = {}) {
	return data({ code, ...detail } satisfies Refusal, { status: statusOf[code] });
}

export function isRefusal(value: unknown): value is Refusal {
	return typeof value === "object" && value !== null && "code" in value && String(value.code) in statusOf;
}
