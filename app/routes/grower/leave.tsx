import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/leave";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { CheckField } from "#app/components/check-field.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { BackToOrchard } from "./parts/back-to-orchard.tsx";
import { leave } from "./parts/leaving.server.ts";
import { getOwnOperation } from "./parts/own-operation.server.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const { name } = await getOwnOperation(context, params.operationId);
	return { name };
}

const LeaveForm = z.object({ sure: z.literal("on", { error: "agreement_needed" }) });

/** Forgets the operation. Who had an account for it alone is signed out, as nothing is left to be signed in for. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = requireOrchard(context);
	const form = parseForm(LeaveForm, await request.formData());
	if (!form.ok) return data({ problems: form.problems }, { status: 400 });
	const outcome = await grower.transaction((trx) => leave(trx, grower.viewer, params.operationId));
	if (outcome === "not_found") throw refusal("orchard_not_found");

	const session = context.get(sessionContext);
	const isGone = outcome.people.includes(grower.viewer.person?.personId ?? "");
	if (isGone) {
		session.unset("personId");
		session.unset("personalLinkId");
	}
	session.flash("toast", { key: "orchard:leave.done" });
	// What a browser kept of a survey on this device goes too.
	const headers = { "clear-site-data": '"storage"' };
	const others = grower.viewer.operationIds.length > 1;
	return redirect(!isGone && others ? href("/orchard") : href("/"), { status: 303, headers });
}

const erased = ["directory", "texts", "pending", "links", "account"] as const;
const kept = ["released", "numbers", "others"] as const;

export default function Leave({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("orchard");
	return (
		<Page title={t("leave.title")} lead={t("leave.lead", { operation: loaderData.name })}>
			<BackToOrchard />
			<ErrorSummary problems={actionData?.problems} labels={{ sure: t("leave.sure") }} />
			<Section title={t("leave.erasedTitle")}>
				<ul className="list-disc space-y-2 pl-6">
					{erased.map((part) => (
						<li key={part}>{t(`leave.erased.${part}`)}</li>
					))}
				</ul>
			</Section>
			<Section title={t("leave.keptTitle")}>
				<ul className="list-disc space-y-2 pl-6">
					{kept.map((part) => (
						<li key={part}>{t(`leave.kept.${part}`)}</li>
					))}
				</ul>
			</Section>
			<Section title={t("leave.doTitle")}>
				<Notice tone="caution">{t("leave.final")}</Notice>
				<p className="mb-4">
					{t("leave.takeFirst")}{" "}
					<a href={href("/orchard/:file", { file: "my-data.json" })} download>
						{t("home.takeAs.json")}
					</a>
				</p>
				<Form method="post" noValidate>
					<CheckField
						name="sure"
						label={t("leave.sure")}
						problem={actionData?.problems.find(({ field }) => field === "sure")}
					/>
					<Confirm
						danger
						trigger={t("leave.button")}
						title={t("leave.question", { operation: loaderData.name })}
						body={t("leave.final")}
						confirmLabel={t("leave.confirm")}
					/>
				</Form>
			</Section>
		</Page>
	);
}
