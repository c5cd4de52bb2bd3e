import express, { type ErrorRequestHandler, type Express } from "express";
import { z } from "zod";
import { securityPolicy } from "../page.ts";
import { inboxPage, messagePage, missingPage } from "./inbox-page.ts";
import type { MailStore } from "./store.ts";
import { Trouble, type TroubleMaker } from "./trouble.ts";

const Search = z.object({
	to: z.string().max(320).catch(""),
	page: z.coerce.number().int().min(1).catch(1),
});

// Written by whoever sent the mail: no script, nothing fetched, links open elsewhere.
const mailPolicy =
	"sandbox allow-popups allow-popups-to-escape-sandbox; default-src 'none'; style-src 'unsafe-inline'; img-src data:; frame-ancestors 'self'";

const badRequest: ErrorRequestHandler = (error, _request, response, next) => {
	if (response.headersSent || !(error?.status < 500)) return next(error);
	response.status(error.status).json({ error: "this is not JSON of a mode and a count" });
};

/** The inbox's pages for people, and the same as JSON for tests. */
export function createInbox(store: MailStore, trouble: TroubleMaker): Express {
	const app = express();
	app.disable("x-powered-by");
	app.use((_request, response, next) => {
		response.set({
			"Cache-Control": "no-store",
			"Referrer-Policy": "no-referrer",
			"X-Content-Type-Options": "nosniff",
		});
		response.set("Content-Security-Policy", securityPolicy({ frames: "'self'" }));
		next();
	});
	app.get("/healthz", (_request, response) => void response.json({ status: "ok" }));
	app.get("/", (request, response) => {
		const { to, page } = Search.parse(request.query);
		response.send(inboxPage(store.list(to), to, page));
	});
	app.get("/messages.json", (request, response) => void response.json(store.list(Search.parse(request.query).to)));
	app.delete(["/messages", "/messages.json"], (_request, response) => {
		store.clear();
		response.status(204).end();
	});
	app.get("/messages/:id.json", ({ params }, response) => {
		const message = store.find(params.id);
		response.status(message ? 200 : 404).json(message ?? { error: "no such message" });
	});
	app.get("/messages/:id/html", ({ params }, response) => {
		const message = store.find(params.id);
		if (!message) return void response.status(404).send(missingPage());
		response.set("Content-Security-Policy", mailPolicy).send(`<base target="_blank">${message.html}`);
	});
	app.get("/messages/:id", ({ params }, response) => {
		const message = store.find(params.id);
		response.status(message ? 200 : 404).send(message ? messagePage(message) : missingPage());
	});
	app.get("/trouble", (_request, response) => void response.json(trouble.present));
	app.post("/trouble", express.json({ limit: "2kb" }), (request, response) => {
		const wanted = Trouble.safeParse(request.body);
		if (!wanted.success) return void response.status(400).json({ error: z.prettifyError(wanted.error) });
		trouble.set(wanted.data);
		response.json(trouble.present);
	});
	app.use(badRequest);
	return app;
}
