import { useTranslation } from "react-i18next";
import { filled } from "#app/collect/editing/fill-gaps.ts";
import { samplePlantings } from "#app/collect/editing/sample-plantings.ts";
import type { Question, Screen } from "#app/collect/form.ts";
import { crops } from "#app/directory/crops.ts";
import { useStepTitle } from "#app/components/step-title.ts";
import { type Language, languages, wordsIn } from "#app/i18n/language.ts";
import { ScreenQuestions } from "#app/routes/grower/parts/screen-questions.tsx";

type PhonePreviewProps = { screen: Screen };

/**
 * A screen as a phone shows it, in both languages' words, drawn by the same parts as the grower's page. Nothing in it can be
 * used: it stands beside the fields, and the try-out is where one answers.
 */
export function PhonePreview({ screen }: PhonePreviewProps) {
	const { t, i18n } = useTranslation("forms");
	const own: Language = i18n.language === "es" ? "es" : "en";
	const other = languages.find((language) => language !== own)!;
	return (
		<aside aria-label={t("preview.title")} className="no-print">
			<p className="mb-2 text-sm font-bold text-quiet">{t("preview.title")}</p>
			<Phone screen={screen} language={own} />
			<details className="mt-4">
				<summary className="min-h-11 cursor-pointer py-2 font-bold text-damson">
					{t("preview.in", { language: t(`language.${other}`) })}
				</summary>
				<Phone screen={screen} language={other} />
			</details>
		</aside>
	);
}

function Phone({ screen, language }: PhonePreviewProps & { language: Language }) {
	const { t } = useTranslation("forms");
	const shown = inLanguage(filled(screen), language) as Screen;
	const [planting] = screen.perPlanting ? samplePlantings([crops[0]!]) : [];
	const title = useStepTitle()({ screen: shown, planting: planting ?? null });
	return (
		<section
			aria-label={t("preview.in", { language: t(`language.${language}`) })}
			// Scrolled by keyboard only while in focus.
			// oxlint-disable-next-line jsx-a11y/no-noninteractive-tabindex
			tabIndex={0}
			className="max-h-[80vh] max-w-[375px] overflow-y-auto rounded-2xl border-4 border-line bg-paper p-4 text-lg"
			lang={language}
		>
			<div inert>
				<p className="text-2xl font-bold">{title}</p>
				{shown.help && <p className="mt-2 text-quiet">{wordsIn(shown.help, language)}</p>}
				<div className="mt-5">
					{shown.questions.length === 0 && <p className="text-quiet">{t("preview.empty")}</p>}
					<ScreenQuestions
						questions={shown.questions.map((question) => withNameOf(question, language))}
						planting={planting ?? null}
						values={{}}
						problems={[]}
						shares={shown.sumToHundred?.map((key) => nameIn(key, language)) ?? []}
						photoHref={() => ""}
					/>
				</div>
			</div>
		</section>
	);
}

/** Two previews and the page's own fields need names that differ. */
function withNameOf(question: Question, language: Language): Question {
	return { ...question, key: nameIn(question.key, language) };
}

function nameIn(key: string, language: Language): string {
	return `preview-${language}-${key}`;
}

/** Every text in one language, whatever the page's own is. */
function inLanguage(value: unknown, language: Language): unknown {
	if (Array.isArray(value)) return value.map((inner) => inLanguage(inner, language));
	if (typeof value !== "object" || value === null) return value;
	const entries = Object.entries(value);
	if ("en" in value && "es" in value) return { en: value[language], es: value[language] };
	return Object.fromEntries(entries.map(([key, inner]) => [key, inLanguage(inner, language)]));
}
