import { useState } from "react";
import { useTranslation } from "react-i18next";
import { useLocation } from "react-router";
import { classes } from "./classes.ts";
import type { ToastData } from "./shell-data.ts";

/** What just happened, said once. Goes with the next page, or when closed. */
export function Toast({ toast }: { toast: ToastData | null }) {
	const { key } = useLocation();
	const [shown, setShown] = useState({ toast, key, closed: false });
	// The root's data stays while pages change, so a message belongs to the place where it first appeared.
	if (shown.toast !== toast) setShown({ toast, key, closed: false });
	const visible = toast && !shown.closed && shown.key === key;
	return (
		<output className="no-print block px-gutter">
			{visible && <ToastText toast={toast} onClose={() => setShown({ ...shown, closed: true })} />}
		</output>
	);
}

function ToastText({ toast, onClose }: { toast: ToastData; onClose: () => void }) {
	const { t } = useTranslation();
	return (
		<div
			className={classes(
				"mt-4 flex items-center justify-between gap-4 border-l-8 px-4 py-2",
				toast.tone === "attention" ? "border-quince bg-quince-wash" : "border-damson bg-damson-wash",
			)}
		>
			<p>{t(toast.key, toast.values)}</p>
			<button
				type="button"
				onClick={onClose}
				aria-label={t("toast.dismiss")}
				className="inline-flex size-11 shrink-0 items-center justify-center text-lg hover:bg-paper"
			>
				×
			</button>
		</div>
	);
}
