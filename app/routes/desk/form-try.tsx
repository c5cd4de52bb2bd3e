import { useEffect, useRef } from "react";
import { useTranslation } from "react-i18next";
import { data, Form } from "react-router";
import type { Route } from "./+types/form-try";
import { shownDefinition } from "#app/collect/editing/fill-gaps.ts";
import { samplePlantings } from "#app/collect/editing/sample-plantings.ts";
import { CarriedAnswers, goOn, showAt, startTrying } from "#app/collect/editing/trying.ts";
import type { Answer } from "#app/collect/form.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Notice } from "#app/components/notice.tsx";
import { cropKeys, crops } from "#app/directory/crops.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { readPosted } from "../grower/parts/posted.server.ts";
import { getForm } from "./parts/forms/form-access.server.ts";
import { TriedStep } from "./parts/forms/tried-step.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const { form } = await getForm(context, params.formId);
	return { hasQuestions: shownDefinition(form.draft).screens.length > 0 };
}

/** One step of the try-out. Answers travel with the page, in its own fields: nothing is kept. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const { form } = await getForm(context, params.formId);
	const sent = await readTried(request);
	const chosen = crops.filter(({ cropKey }) => sent.crops.includes(cropKey));
	const trying = {
		definition: shownDefinition(form.draft),
		plantings: samplePlantings(chosen),
		answers: sent.answers,
	};
	const today = new Date().toISOString().slice(0, 10);
	const settings = { language: getLanguage(context), season: Number(today.slice(0, 4)), today };
	const tried =
		sent.go === "start"
			? startTrying({ ...trying, answers: [] }, settings)
			: sent.go.startsWith("back:")
				? showAt(trying, sent.go.slice("back:".length), settings)
				: goOn(trying, sent.step, sent.values, settings);
	const problems = tried.at === "screen" ? (tried.posted?.problems ?? []) : [];
	return data({ tried, crops: sent.crops, problems }, { status: problems.length > 0 ? 400 : 200 });
}

/** What the page carried: which plantings, the answers so far, where one was and where one goes; and the screen's own boxes. */
async function readTried(request: Request) {
	const { values } = await readPosted(request);
	const one = (name: string) => [values[name] ?? ""].flat()[0]!;
	const carried = CarriedAnswers.parse(jsonIn(one("try-answers")));
	return {
		go: one("try-go"),
		step: one("try-step"),
		crops: [values["try-crops"] ?? []].flat().filter((crop) => (cropKeys as readonly string[]).includes(crop)),
		answers: carried as Answer[],
		values,
	};
}

function jsonIn(text: string): unknown {
	try {
		return JSON.parse(text);
	} catch {
		return undefined;
	}
}

export default function FormTry({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("forms");
	const box = useRef<HTMLDivElement>(null);
	// The button that led here is gone, or below the screen that it brought; a problem or a check has the focus already.
	useEffect(() => {
		if (!actionData || !box.current || box.current.contains(document.activeElement)) return;
		box.current.focus({ preventScroll: true });
		box.current.scrollIntoView();
	}, [actionData]);
	if (!loaderData.hasQuestions) return <p>{t("try.nothing")}</p>;
	const { tried, crops: chosen } = actionData ?? { tried: undefined, crops: cropKeys.slice(0, 2) as string[] };
	return (
		<>
			<Notice tone="info">{t("try.nothingKept")}</Notice>
			{tried && tried.at !== "nothing" ? (
				<div ref={box} tabIndex={-1} className="max-w-[40rem] border-2 border-line p-5 text-lg">
					<TriedStep tried={tried} crops={chosen} />
				</div>
			) : null}
			{tried?.at === "nothing" && <Notice tone="attention">{t("try.nobodyAsked")}</Notice>}
			<Form method="post" className="mt-8 max-w-prose">
				<ChoiceField
					kind="checkbox"
					name="try-crops"
					legend={t("try.plantings")}
					help={t("try.plantingsHelp")}
					options={cropKeys.map((crop) => ({ value: crop, label: t(`common:crop.${crop}`) }))}
					defaultValue={chosen}
				/>
				<Button kind={tried ? "secondary" : "primary"} name="try-go" value="start">
					{t(tried ? "try.again" : "try.start")}
				</Button>
			</Form>
		</>
	);
}
