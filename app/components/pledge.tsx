import { useTranslation } from "react-i18next";

/** What the network promises before it asks; a change of these words is a new `pledgeVersion`. */
export function Pledge() {
	const { t } = useTranslation("grower");
	return (
		<ul className="list-disc space-y-2 pl-6">
			{(["use", "who", "never", "law", "free"] as const).map((part) => (
				<li key={part}>{t(`pledge.${part}`)}</li>
			))}
		</ul>
	);
}
