import { escape, page } from "../page.ts";
import { people } from "./people.mjs";
import type { AuthorizeQuery } from "./request.ts";

const words = {
	en: {
		title: "Demo sign-in",
		heading: "Who would you like to be?",
		notice:
			"This page stands in for an institution's sign-in. All people here are invented, and no password is asked for.",
		people: "Demo people",
		somebody: "Somebody new",
		somebodyHelp: "Nobody has given this person any right yet.",
		name: "Name",
		email: "E-mail",
		nameProblem: "Enter a name of at most 200 characters",
		emailProblem: "Enter an e-mail address, like ana@orchard.example",
		submit: "Sign in as this person",
		cancel: "Cancel and go back",
		other: "Español",
		refusedTitle: "This sign-in cannot go on",
		refused:
			"The application that sent you here is not known to this sign-in, or asked to send you on to an address that is not its own. Go back and start again.",
	},
	es: {
		title: "Inicio de sesión de demostración",
		heading: "¿Quién quiere ser?",
		notice:
			"Esta página sustituye al inicio de sesión de una institución. Todas las personas son inventadas y no se pide contraseña.",
		people: "Personas de demostración",
		somebody: "Otra persona",
		somebodyHelp: "Nadie le ha dado permisos todavía.",
		name: "Nombre",
		email: "Correo electrónico",
		nameProblem: "Escriba un nombre de 200 caracteres como máximo",
		emailProblem: "Escriba un correo electrónico, como ana@orchard.example",
		submit: "Entrar como esta persona",
		cancel: "Cancelar y volver",
		other: "English",
		refusedTitle: "No se puede continuar",
		refused:
			"Este inicio de sesión no conoce la aplicación que le envió aquí, o esta pidió enviarle a una dirección que no es suya. Vuelva atrás y empiece de nuevo.",
	},
};
export type Language = keyof typeof words;

const carried = [
	"client_id",
	"redirect_uri",
	"response_type",
	"state",
	"code_challenge",
	"code_challenge_method",
	"scope",
	"nonce",
] as const;

function link(query: AuthorizeQuery, changes: Record<string, string>): string {
	const parameters = new URLSearchParams();
	for (const key of [...carried, "lang"] as const) if (query[key] !== undefined) parameters.set(key, query[key]);
	for (const [key, value] of Object.entries(changes)) parameters.set(key, value);
	return escape(`/authorize?${parameters}`);
}

/** One labelled field of the form for somebody new, with its problem beside it. */
function field(key: "name" | "email", language: Language, value: string, bad: boolean): string {
	const w = words[language];
	const problem = bad ? `<p class="problem" id="${key}-problem">${w[`${key}Problem`]}</p>` : "";
	const described = bad ? ` aria-invalid="true" aria-describedby="${key}-problem"` : "";
	return `<label for="${key}">${w[key]}</label>${problem}
<input id="${key}" name="${key}" autocomplete="off" value="${escape(value)}"${described}>`;
}

/** The page that asks whom to sign in as. */
export function choosePage(query: AuthorizeQuery, language: Language, problems: ("name" | "email")[]): string {
	const w = words[language];
	const rows = people.map(
		({ subject, name, note }) =>
			`<li><a href="${link(query, { persona: subject })}"><strong>${escape(name)}</strong><span>${escape(note[language])}</span></a></li>`,
	);
	const hidden = carried
		.filter((key) => query[key] !== undefined)
		.map((key) => `<input type="hidden" name="${key}" value="${escape(query[key] ?? "")}">`);
	const other = language === "en" ? "es" : "en";
	return page(
		language,
		w.title,
		`<p><a lang="${other}" hreflang="${other}" href="${link(query, { lang: other })}">${w.other}</a></p>
<h1>${w.heading}</h1>
<p class="notice">${w.notice}</p>
<h2 id="people">${w.people}</h2>
<ul class="rows" aria-labelledby="people">${rows.join("\n")}</ul>
<h2 id="new">${w.somebody}</h2>
<p class="quiet">${w.somebodyHelp}</p>
<form action="/authorize" method="get" aria-labelledby="new" novalidate>
${hidden.join("\n")}
<input type="hidden" name="lang" value="${language}">
<input type="hidden" name="persona" value="new">
${field("name", language, query.name ?? "", problems.includes("name"))}
${field("email", language, query.email ?? "", problems.includes("email"))}
<button>${w.submit}</button>
</form>
<p><a href="${link(query, { persona: "cancel" })}">${w.cancel}</a></p>`,
	);
}

/** Shown instead of a redirect when whoever asked is not known. */
export function refusedPage(language: Language): string {
	const w = words[language];
	return page(language, w.refusedTitle, `<h1>${w.refusedTitle}</h1><p>${w.refused}</p>`);
}
