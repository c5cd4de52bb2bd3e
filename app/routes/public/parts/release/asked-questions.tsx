import { useTranslation } from "react-i18next";
import { Notice } from "#app/components/notice.tsx";
import { type Language, languages } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { AskedQuestion, AskedScreen } from "#app/lib/asked-form.ts";
import { helpContact } from "#app/lib/help-contact.ts";
import type { Words } from "#app/lib/words.ts";
import type { KeptForm } from "#app/publish/asked-form.server.ts";

/** The questions as growers read them, the page's own language first; or, of an older release, that they were not kept. */
export function AskedQuestions({ asked }: { asked: KeptForm | null }) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	if (!asked) {
		return (
			<Notice tone="info" title={t("asked.notKeptTitle")}>
				{t("asked.notKept", { email: helpContact.email })}
			</Notice>
		);
	}
	const { form, version } = asked;
	const count = form.screens.reduce((sum, { questions }) => sum + questions.length, 0);
	return (
		<>
			<p className="max-w-prose">{t("asked.lead", { version, minutes: format.number(form.minutes) })}</p>
			<details className="mt-4">
				<summary className="min-h-11 cursor-pointer py-2 font-bold text-damson">
					{t("asked.show", { count, value: format.number(count) })}
				</summary>
				{form.screens.map((screen) => (
					<Screen key={screen.key} screen={screen} />
				))}
			</details>
		</>
	);
}

function Screen({ screen }: { screen: AskedScreen }) {
	const { t } = useTranslation("dataroom");
	return (
		<section className="mt-6 border-t border-rule pt-3">
			<h3 className="text-base">
				<InBoth words={screen.title} />
			</h3>
			{screen.perPlanting && <p className="text-sm text-quiet">{t("asked.perPlanting")}</p>}
			{screen.condition !== undefined && <p className="text-sm text-quiet">{t("asked.screenAsked")}</p>}
			{screen.help && (
				<p className="mt-1 text-sm">
					<InBoth words={screen.help} />
				</p>
			)}
			<ol className="mt-3 list-none space-y-4">
				{screen.questions.map((question) => (
					<li key={question.key} className="break-inside-avoid">
						<Question question={question} />
					</li>
				))}
			</ol>
		</section>
	);
}

function Question({ question }: { question: AskedQuestion }) {
	const { t } = useTranslation("dataroom");
	const { key, type, text, help, required, unitFamily, options = [], condition } = question;
	const kind = [
		unitFamily ? t(`asked.family.${unitFamily}`) : t(`asked.type.${type}`),
		!required && t("asked.optional"),
		condition !== undefined && t("asked.questionAsked"),
	].filter(Boolean);
	return (
		<>
			<p className="font-bold">
				<InBoth words={text} />
			</p>
			{help && (
				<p className="text-sm">
					<InBoth words={help} />
				</p>
			)}
			<p className="text-sm text-quiet">
				{kind.join(" · ")} · <code>{key}</code>
			</p>
			{options.length > 0 && (
				<ul className="mt-1 list-disc pl-6 text-sm">
					{options.map((option) => (
						<li key={option.key}>
							<InBoth words={option.text} />
						</li>
					))}
				</ul>
			)}
		</>
	);
}

/** A text in the page's language, then in the other, each marked as what it is. */
function InBoth({ words }: { words: Words }) {
	const { i18n } = useTranslation();
	const own: Language = i18n.language === "es" ? "es" : "en";
	const others = languages.filter((language) => language !== own);
	return (
		<>
			<span lang={own}>{words[own]}</span>
			{others.map((language) => (
				<span key={language} lang={language} className="block font-normal text-quiet">
					{words[language]}
				</span>
			))}
		</>
	);
}
