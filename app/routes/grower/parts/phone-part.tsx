import { useTranslation } from "react-i18next";
import { keptWordKeys, type KeptWords, type PageData } from "../phone/page-data.ts";
// oxlint-disable-next-line import/default -- the query makes it the address of the built script
import pageScript from "../phone/page.ts?worker&url";

export type PhonePage = Omit<PageData, "words" | "language" | "labels">;
type PhonePartProps = PhonePage & { labels?: Record<string, string> };

/** What the phone's script reads of a page, and the script: the only one on a grower's pages. They work without it. */
export function PhonePart({ labels, ...page }: PhonePartProps) {
	const { t, i18n } = useTranslation("grower");
	const words = Object.fromEntries(keptWordKeys.map((key) => [key, t(`kept.${key}`, { names: "{{names}}" })]));
	const data: PageData = {
		...page,
		language: i18n.language === "es" ? "es" : "en",
		words: words as KeptWords,
		labels: labels ?? {},
	};
	return (
		<>
			<div id="answering" hidden data-page={JSON.stringify(data)} />
			<script type="module" src={pageScript} />
		</>
	);
}

/** Where the script says what has become of what was typed. */
export function KeptWord() {
	return <output id="kept-word" className="block min-h-7 text-base text-quiet" />;
}

/** On a page that refuses: where the script says what becomes of answers that only this phone holds. */
export function RefusedPart({ code }: { code: string }) {
	const { t } = useTranslation("grower");
	return (
		<>
			<output id="refused" data-code={code} data-late={t("kept.late")} className="block pb-8 font-bold" />
			<script type="module" src={pageScript} />
		</>
	);
}
