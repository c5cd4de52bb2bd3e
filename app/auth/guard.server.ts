import type { MiddlewareFunction, RouterContextProvider } from "react-router";
import { refusal } from "#app/lib/refusal.ts";
import { holderOf } from "./holder.server.ts";
import { withPosted } from "./posted-form.server.ts";
import { scopedTransaction, type Scope, type Trx } from "./scope.server.ts";
import type { Associate, Coordinator, Grower, Person, Researcher } from "./viewer.ts";
import { surveyInHandContext } from "./survey-in-hand.server.ts";
import { visitorContext } from "./visitor.server.ts";

type Context = Readonly<RouterContextProvider>;
/** A viewer with transactions that see what the viewer may see, and nothing else. */
export type Access<V> = { viewer: V; transaction<T>(work: (trx: Trx) => Promise<T>): Promise<T> };

function access<V>(viewer: V, scope: Scope): Access<V> {
	return { viewer, transaction: (work) => scopedTransaction(scope, work) };
}

/** @throws refusal 401 when nobody is signed in, 412 when the page that sends was somebody else's. */
export function requirePerson(context: Context): Access<Person> {
	const { person, sender } = context.get(visitorContext);
	if (!person) throw refusal("sign_in_needed");
	if (sender && sender !== holderOf("person", person.personId)) throw refusal("other_person");
	return access(person, { kind: "none" });
}

/** An associate, limited to granted states. @throws refusal 401 or 403. */
export function requireAssociate(context: Context): Access<Associate> {
	const { viewer: person } = requirePerson(context);
	const { stateFips } = context.get(visitorContext).grants;
	if (stateFips.length === 0) throw refusal("role_needed", { role: "associate" });
	const surveyId = context.get(surveyInHandContext) ?? undefined;
	return access({ ...person, role: "associate", stateFips }, { kind: "desk", stateFips, surveyId });
}

/**
 * A coordinator: grants, approvals, log. The scope is a desk's with no state, so raw answers stay out of reach; drafts of
 * releases, which cover the network, are in it.
 */
export function requireCoordinator(context: Context): Access<Coordinator> {
	const { viewer: person } = requirePerson(context);
	if (!context.get(visitorContext).grants.coordinator) throw refusal("role_needed", { role: "coordinator" });
	return access({ ...person, role: "coordinator" }, { kind: "desk", stateFips: [] });
}

/** A researcher whose request was approved. Without a transaction: the data room reads as the reader only. */
export function requireResearcher(context: Context): Researcher {
	const { viewer: person } = requirePerson(context);
	if (!context.get(visitorContext).grants.researcher) throw refusal("role_needed", { role: "researcher" });
	return { ...person, role: "researcher" };
}

/**
 * Whoever answers a survey for an operation: by the personal link that opens it, else signed in. A link opens its own place
 * only, so that a grower who is signed in too still reaches the other operations.
 * @throws refusal 401 when neither is there, 404 when what is there opens another place.
 */
export function requireGrower(context: Context, place: { surveyId: string; operationId: string }): Access<Grower> {
	const { link, person, grants } = context.get(visitorContext);
	if (link && link.surveyId === place.surveyId && link.operationId === place.operationId) {
		const operationIds = [link.operationId];
		const scope = { kind: "grower", operationIds, surveyId: link.surveyId } as const;
		return access({ role: "grower", operationIds, link, person: null }, scope);
	}
	if (person && grants.operationIds.length > 0) return requireOrchard(context);
	if (link || person) throw refusal("survey_not_found");
	throw refusal("link_session_over");
}

/** A signed-in grower's own pages: contact data and past seasons, which a personal link never opens. */
export function requireOrchard(context: Context): Access<Grower> {
	const { viewer: person } = requirePerson(context);
	const { operationIds } = context.get(visitorContext).grants;
	if (operationIds.length === 0) throw refusal("role_needed", { role: "grower" });
	return access({ role: "grower", operationIds, link: null, person }, { kind: "grower", operationIds });
}

/** Guards of the areas of the site, one for each; their layouts have loaders, so that data requests pass them too. */
const guard =
	(require: (context: Context) => unknown): MiddlewareFunction<Response> =>
	async ({ context, request }, next) => {
		try {
			require(context);
		} catch (refused) {
			throw await withPosted(refused, request);
		}
		return next();
	};
export const deskGuard = guard(requireAssociate);
export const networkGuard = guard(requireCoordinator);
export const orchardGuard = guard(requireOrchard);
export const dataroomGuard = guard(requirePerson);
