import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/stop-mail";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { partOf } from "#app/collect/personal-link.server.ts";
import { Button } from "#app/components/button.tsx";
import { Page } from "#app/components/page.tsx";
import { findMailWish, setMailWish } from "#app/directory/mail-wish.server.ts";
import { speakLikeMail } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { operationOfStopToken } from "#app/mail/stop-token.server.ts";

export const handle = { bare: true };

/** Looks only, for mail scanners open links too. One answer for every token that is not ours. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const operationId = operationOfStopToken(params.token);
	const wish = operationId && (await scopedTransaction({ kind: "network" }, (trx) => findMailWish(trx, operationId)));
	if (!wish) throw refusal("stop_link_not_valid");
	await speakLikeMail(context, request, wish.language);
	return { operation: partOf(wish.name), wanted: wish.mailWanted };
}

/** What a mail program posts (RFC 8058) holds no step of ours, and means that mail shall stop. */
const Step = z.object({ step: z.enum(["stop", "resume"]).catch("stop") });

export async function action({ params, request }: Route.ActionArgs) {
	const operationId = operationOfStopToken(params.token);
	const sent = await request.formData().catch(() => new FormData());
	const { step } = Step.parse(Object.fromEntries(sent));
	if (!operationId) throw refusal("stop_link_not_valid");
	const outcome = await scopedTransaction({ kind: "network" }, (trx) =>
		setMailWish(trx, operationId, step === "resume"),
	);
	if (outcome === "not_found") throw refusal("stop_link_not_valid");
	return { done: step };
}

export default function StopMail({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("grower");
	const { operation, wanted } = loaderData;
	const state = wanted ? (actionData?.done === "resume" ? "resumed" : "wanted") : "stopped";
	return (
		<Page title={t(`stopMail.${state}.title`, { operation })} lead={t(`stopMail.${state}.lead`)}>
			<p>{t("stopMail.receipts")}</p>
			<Form method="post" className="mt-6">
				<Button name="step" value={wanted ? "stop" : "resume"} kind={state === "wanted" ? "primary" : "secondary"}>
					{t(wanted ? "stopMail.stop" : "stopMail.resume")}
				</Button>
			</Form>
			<p className="mt-6 text-base text-quiet">{t("stopMail.settings")}</p>
		</Page>
	);
}
