import { useTranslation } from "react-i18next";
import { data, Form } from "react-router";
import type { Route } from "./+types/subscribe";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { countSubscribing } from "#app/auth/subscribe-tries.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { languages } from "#app/i18n/language.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import { type FormValues, parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { SubscribeForm } from "#app/publish/readership/choice.ts";
import { addRequest } from "#app/publish/readership/subscribers.server.ts";
import { listCoveredStates, listCrops, listReleases } from "#app/publish/releases.server.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const releases = await listReleases();
	const [crops, states] = await Promise.all([
		Promise.all(releases.map(({ releaseId }) => listCrops(releaseId))),
		Promise.all(releases.map(({ releaseId }) => listCoveredStates(releaseId))),
	]);
	return {
		crops: [...new Set(crops.flat())].filter((crop) => crop !== "all"),
		states: [...new Set(states.flat())].toSorted(),
		language: getLanguage(context),
	};
}

/** The same answer whether an address is known or not: nobody learns here who gets reports. */
export async function action({ request }: Route.ActionArgs) {
	const form = parseForm(SubscribeForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems, sent: false }, { status: 400 });
	if (!(await countSubscribing(request, form.value.email))) throw refusal("too_many_tries");
	await scopedTransaction({ kind: "none" }, async (trx) => {
		const requestId = await addRequest(trx, form.value);
		await queueJob(trx, "confirm_subscription", { requestId });
	});
	return { values: {} as FormValues, problems: [], sent: true };
}

export default function Subscribe({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("report");
	if (actionData?.sent) {
		return (
			<Page title={t("subscribe.sent.title")} lead={t("subscribe.sent.lead")} width="narrow">
				<p>{t("subscribe.sent.body")}</p>
			</Page>
		);
	}
	return (
		<Page title={t("subscribe.title")} lead={t("subscribe.lead")} width="narrow">
			<ErrorSummary
				problems={actionData?.problems}
				labels={{
					email: t("subscribe.email"),
					language: t("subscribe.language"),
					crops: t("subscribe.crops"),
					states: t("subscribe.states"),
				}}
			/>
			<SubscribeFields {...loaderData} sent={actionData} />
		</Page>
	);
}

type FieldsProps = Route.ComponentProps["loaderData"] & { sent: Route.ComponentProps["actionData"] };

function SubscribeFields({ crops, states, language, sent }: FieldsProps) {
	const { t } = useTranslation("report");
	const values = sent?.values;
	const problem = (name: string) => sent?.problems.find(({ field }) => field === name);
	const typed = (name: string) => (typeof values?.[name] === "string" ? values[name] : "");
	const ticked = (name: string) => [values?.[name] ?? []].flat().map(String);
	return (
		<Form method="post" noValidate>
			<TextField
				name="email"
				type="email"
				autoComplete="email"
				label={t("subscribe.email")}
				help={t("subscribe.again")}
				defaultValue={typed("email")}
				problem={problem("email")}
			/>
			<ChoiceField
				kind="radio"
				name="language"
				legend={t("subscribe.language")}
				defaultValue={typed("language") || language}
				options={languages.map((one) => ({ value: one, label: t(`common:language.${one}`) }))}
				problem={problem("language")}
			/>
			<ChoiceField
				kind="checkbox"
				name="crops"
				legend={t("subscribe.crops")}
				help={t("subscribe.noneIsAll")}
				optional
				defaultValue={ticked("crops")}
				options={crops.map((crop) => ({ value: crop, label: t(`common:crop.${crop}`) }))}
				problem={problem("crops")}
			/>
			<ChoiceField
				kind="checkbox"
				name="states"
				legend={t("subscribe.states")}
				help={t("subscribe.noneIsAll")}
				optional
				defaultValue={ticked("states")}
				options={states.map((state) => ({ value: state, label: t(`common:state.${state}`) }))}
				problem={problem("states")}
			/>
			<Notice tone="info" title={t("subscribe.kept.title")}>
				{t("subscribe.kept.body")}
			</Notice>
			<Button>{t("subscribe.button")}</Button>
		</Form>
	);
}
