import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import { TallyStrokes } from "./tally-strokes.tsx";

const most = 50;

type TallyCountProps = { count: number; of?: number; label: string };

/** Things counted, as tally strokes with the number beside. Of many, one stroke stands for ten, a hundred, … and says so. */
export function TallyCount({ count, of, label }: TallyCountProps) {
	const { t } = useTranslation();
	const format = useFormat();
	const each = 10 ** Math.max(0, Math.ceil(Math.log10(Math.max(count, of ?? 0, 1) / most)));
	const words = of === undefined ? "tally.count" : "tally.of";
	return (
		<div>
			<p>
				<strong className="text-2xl">{format.number(count)}</strong>{" "}
				<span className="text-quiet">{t(words, { of: format.number(of ?? 0), label })}</span>
			</p>
			<TallyStrokes done={Math.floor(count / each)} all={of === undefined ? undefined : Math.ceil(of / each)} />
			{each > 1 && <p className="text-xs text-quiet">{t("tally.each", { value: format.number(each) })}</p>}
		</div>
	);
}
