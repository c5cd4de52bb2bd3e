import { createInstance } from "i18next";
import { createRoot } from "react-dom/client";
import { I18nextProvider, initReactI18next } from "react-i18next";
import { createBrowserRouter, type DataRouter, RouterProvider } from "react-router";
import { typedStep } from "#app/collect/outbox.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";
import { tellHalfTypedDays } from "#app/lib/half-typed-days.ts";
import { openPageStore } from "../leaving-note.ts";
import type { Pack } from "../pack.ts";
import { here } from "./here.ts";
import { routes } from "./pages.tsx";
import { findSurvey } from "./survey.ts";
import { watchForSignal } from "./watch.ts";

/*
 * The survey's pages where there is no signal: the same looks, drawn by the phone from what it holds. A page that the phone
 * does not hold keeps the words that the server has put there.
 */
tellHalfTypedDays(document);
void start();

async function start(): Promise<void> {
	here.store = await openPageStore();
	const survey = await findSurvey(here.store, location.pathname);
	const place = document.getElementById("offline");
	if (!survey || !place) return;
	const wasSent = location.hash === "#continue";
	history.replaceState(null, "", location.pathname + location.search);
	const router = createBrowserRouter(routes);
	document.documentElement.lang = survey.pack.language;
	createRoot(place).render(
		<I18nextProvider i18n={await wordsOf(survey.pack)}>
			<RouterProvider router={router} />
		</I18nextProvider>,
	);
	watchForSignal(survey.pack);
	if (wasSent) await goOn(router, survey.pack.responseId);
}

async function wordsOf({ language, words }: Pack) {
	const i18next = createInstance();
	await i18next.use(initReactI18next).init({ ...i18nextSettings, lng: language, resources: { [language]: words } });
	return i18next;
}

/** The button was pressed when signal was lost: what it sent is taken from the phone, which holds it. */
async function goOn(router: DataRouter, responseId: string): Promise<void> {
	await new Promise<void>((resolve) => {
		if (router.state.initialized) resolve();
		else router.subscribe(({ initialized }) => initialized && resolve());
	});
	const held = await here.store.read(responseId);
	const stepKey = /\/ask\/([^/]+)$/.exec(location.pathname)?.[1];
	const step = held && stepKey !== undefined ? typedStep(held.outbox, decodeURIComponent(stepKey)) : undefined;
	if (!step && !location.pathname.endsWith("/review")) return;
	const formData = new FormData();
	for (const [name, value] of Object.entries(step?.values ?? {}))
		for (const text of [value].flat()) formData.append(name, text);
	await router.navigate(location.pathname + location.search, { formMethod: "post", formData });
}
