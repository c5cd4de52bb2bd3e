import express, { type Express, type Request, type Response } from "express";
import { OAuth2Issuer, OAuth2Service } from "oauth2-mock-server";
import { securityPolicy } from "../page.ts";
import { choosePage, refusedPage, type Language } from "./choose-page.ts";
import { isClient, Ledger } from "./codes.ts";
import {
	chosenAccount,
	isKnownClient,
	readQuery,
	requestError,
	type Account,
	type AuthorizeQuery,
	type Client,
} from "./request.ts";

type Options = { issuer: string; client: Client; now?: () => number };
type Chosen = Request & { account?: Account };

/** `now` is for tests of the minute that a code lives. */
export async function createSignIn({ issuer: address, client, now }: Options): Promise<Express> {
	const issuer = new OAuth2Issuer();
	issuer.url = address;
	await issuer.keys.generate("RS256");
	const service = new OAuth2Service(issuer);
	const ledger = new Ledger(now);
	connectEvents(service, ledger);

	const app = express();
	app.disable("x-powered-by");
	app.use((_request, response, next) => {
		response.set({
			"Cache-Control": "no-store",
			"Referrer-Policy": "no-referrer",
			"X-Content-Type-Options": "nosniff",
		});
		next();
	});
	app.get("/healthz", (_request, response) => void response.json({ status: "ok" }));
	app.get("/", (_request, response) => void response.redirect("/.well-known/openid-configuration"));
	app.get("/.well-known/openid-configuration", (_request, response) => void response.json(discovery(address)));
	app.get("/authorize", (request: Chosen, response) => authorize(request, response, client, service));
	app.post("/token", express.urlencoded({ extended: false, limit: "20kb" }), (request: Chosen, response) => {
		trade(request, response, client, ledger, service);
	});
	app.get("/userinfo", (request: Chosen, response) => {
		request.account = ledger.findAccount(request.headers.authorization);
		if (request.account) return service.requestHandler(request, response);
		response.status(401).set("WWW-Authenticate", 'Bearer error="invalid_token"').json({ error: "invalid_token" });
	});
	app.get("/jwks", (request, response) => service.requestHandler(request, response));
	return app;
}

/** The mock knows neither people nor who holds which code; these tell it. */
function connectEvents(service: OAuth2Service, ledger: Ledger): void {
	service.on("beforeAuthorizeRedirect", ({ url }, request) => {
		const { account, query } = request as Chosen;
		const { code_challenge = "", redirect_uri = "" } = readQuery(query);
		const code = url.searchParams.get("code");
		if (account && code) ledger.addCode(code, account, code_challenge, redirect_uri);
	});
	service.on("beforeTokenSigning", ({ payload }, request) => {
		const { account } = request as unknown as Chosen;
		if (account) Object.assign(payload, claims(account));
	});
	service.on("beforeResponse", (answer, request) => {
		const { account } = request as unknown as Chosen;
		if (answer.body === "") return;
		delete answer.body.refresh_token; // none is honoured here
		if (account) ledger.addToken(String(answer.body.access_token), account);
	});
	service.on("beforeUserinfo", (answer, request) => {
		const { account } = request as Chosen;
		if (account) answer.body = claims(account);
	});
}

const claims = ({ subject, name, email }: Account) => ({ sub: subject, name, email, email_verified: true });

function discovery(issuer: string) {
	return {
		issuer,
		authorization_endpoint: `${issuer}/authorize`,
		token_endpoint: `${issuer}/token`,
		userinfo_endpoint: `${issuer}/userinfo`,
		jwks_uri: `${issuer}/jwks`,
		response_types_supported: ["code"],
		grant_types_supported: ["authorization_code"],
		subject_types_supported: ["public"],
		id_token_signing_alg_values_supported: ["RS256"],
		scopes_supported: ["openid", "profile", "email"],
		token_endpoint_auth_methods_supported: ["client_secret_basic", "client_secret_post"],
		code_challenge_methods_supported: ["S256"],
		ui_locales_supported: ["en", "es"],
	};
}

function languageOf(request: Request, { lang }: AuthorizeQuery): Language {
	if (lang === "en" || lang === "es") return lang;
	return request.acceptsLanguages("en", "es") === "es" ? "es" : "en";
}

function authorize(request: Chosen, response: Response, client: Client, service: OAuth2Service): void {
	const query = readQuery(request.query);
	const language = languageOf(request, query);
	const origins = client.redirectUris.map((uri) => new URL(uri).origin).join(" ");
	response.set("Content-Security-Policy", securityPolicy({ formAction: `'self' ${origins}` }));
	if (!isKnownClient(query, client)) return void response.status(400).send(refusedPage(language));

	const error = requestError(query) ?? (query.persona === "cancel" ? { error: "access_denied" } : undefined);
	if (error) {
		const back = new URL(query.redirect_uri ?? "");
		for (const [key, value] of Object.entries({ ...error, state: query.state }))
			if (value) back.searchParams.set(key, value);
		return response.redirect(back.href);
	}
	const { account, problems } = chosenAccount(query);
	if (!account) return void response.status(problems.length ? 400 : 200).send(choosePage(query, language, problems));
	request.account = account;
	service.requestHandler(request, response);
}

/** The mock would take any code, secret and address; each is checked here, so that an application's test can fail. */
function trade(request: Chosen, response: Response, client: Client, ledger: Ledger, service: OAuth2Service): void {
	const body: Record<string, unknown> = request.body ?? {};
	const sent = Object.fromEntries(Object.entries(body).filter(([, value]) => typeof value === "string"));
	if (!isClient(client, request.headers.authorization, sent)) {
		return void response.status(401).set("WWW-Authenticate", "Basic").json({ error: "invalid_client" });
	}
	if (sent.grant_type !== "authorization_code")
		return void response.status(400).json({ error: "unsupported_grant_type" });
	request.account = ledger.redeem(sent);
	if (!request.account) return void response.status(400).json({ error: "invalid_grant" });
	service.requestHandler(request, response);
}
