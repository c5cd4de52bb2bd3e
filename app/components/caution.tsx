import { useTranslation } from "react-i18next";
import { Notice } from "./notice.tsx";

/** What to heed where figures may lead somebody to dangerous work; the words are `public:caution.<key>`. */
export function Caution({ caution }: { caution: string }) {
	const { t } = useTranslation("public");
	return (
		<Notice tone="caution" title={t(`caution.${caution}.title`)}>
			{t(`caution.${caution}.body`)}
		</Notice>
	);
}
