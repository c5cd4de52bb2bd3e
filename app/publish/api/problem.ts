import type { TFunction } from "i18next";
import type { ProblemDetails } from "./items.ts";

/** Every way in which the API says no, with its status. The words are `dataroom:api.problem.<code>`. */
export const problemStatus = {
	bad_parameter: 400,
	key_not_valid: 401,
	key_expired: 401,
	access_ended: 403,
	key_out_of_scope: 403,
	not_found: 404,
	file_not_found: 404,
	release_not_found: 404,
	method_not_allowed: 405,
	not_acceptable: 406,
	release_withdrawn: 410,
	range_outside: 416,
	too_many_requests: 429,
	files_not_ready: 503,
	service_away: 503,
} as const;
export type ProblemCode = keyof typeof problemStatus;

/** Why one parameter was not understood. The words are `dataroom:api.wrong.<code>`. */
export type Wrong = {
	parameter: string;
	code:
		| "unknown_parameter"
		| "malformed"
		| "too_many"
		| "twice"
		| "unknown_code"
		| "unknown_listed"
		| "out_of_range"
		| "cursor"
		| "range"
		| "without_figures"
		| "without_files";
	values?: Record<string, string | number>;
	allowed?: readonly string[];
};

/** Thrown where a request cannot be answered, and told once, by the one place that answers. */
export class ApiProblem extends Error {
	readonly code: ProblemCode;
	readonly wrong: Wrong[];
	readonly headers: Record<string, string>;

	constructor(code: ProblemCode, wrong: Wrong[] = [], headers: Record<string, string> = {}) {
		super(code);
		this.code = code;
		this.wrong = wrong;
		this.headers = headers;
	}
}

/** Lists as long as this are told; of a longer one the address that lists it is. */
const mostTold = 60;

export function problemBody(problem: ApiProblem, instance: string, reference: string, t: TFunction): ProblemDetails {
	const { code, wrong } = problem;
	return {
		type: `${reference}#${code}`,
		title: t(`dataroom:api.problem.${code}.title`),
		status: problemStatus[code],
		detail: t(`dataroom:api.problem.${code}.detail`),
		instance,
		...(wrong.length > 0 && {
			errors: wrong.map(({ parameter, code: why, values, allowed }) => ({
				parameter,
				detail: t(`dataroom:api.wrong.${why}`, { parameter, ...values }),
				...(allowed && allowed.length <= mostTold && { allowed: [...allowed] }),
			})),
		}),
	};
}
