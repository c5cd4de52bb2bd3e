import { useState } from "react";
import { useTranslation } from "react-i18next";
import { Button } from "./button.tsx";
import { useHydrated } from "./use-hydrated.ts";

type CopyButtonProps = { text: string; label: string };

/** Puts a text on the clipboard and says so. Without scripts there is no button: the text can be marked by hand. */
export function CopyButton({ text, label }: CopyButtonProps) {
	const { t } = useTranslation();
	const [outcome, setOutcome] = useState<"copied" | "failed" | null>(null);
	if (!useHydrated()) return null;
	const copy = () =>
		navigator.clipboard.writeText(text).then(
			() => setOutcome("copied"),
			() => setOutcome("failed"),
		);
	return (
		<span className="inline-flex items-center gap-2">
			<Button type="button" kind="secondary" size="small" onClick={() => void copy()}>
				{label}
			</Button>
			<output className="text-sm text-quiet">{outcome && t(`copy.${outcome}`)}</output>
		</span>
	);
}
