import { type ReactNode, useId, useRef } from "react";
import { useTranslation } from "react-i18next";
import { Button, buttonClasses, type ButtonKind, type ButtonSize } from "./button.tsx";
import { useHydrated } from "./use-hydrated.ts";

type ConfirmProps = {
	/** The words of the button that asks. */
	trigger: string;
	title: string;
	body: ReactNode;
	confirmLabel: string;
	name?: string;
	value?: string;
	danger?: boolean;
	/** Of the button that asks. */
	size?: ButtonSize;
	/** Hidden inputs. */
	children?: ReactNode;
};

/** Asks before an act that cannot be undone. Stands inside a form, which the second button sends. */
export function Confirm(props: ConfirmProps) {
	return useHydrated() ? <ConfirmDialog {...props} /> : <ConfirmDetails {...props} />;
}

const triggerKind = (danger?: boolean): ButtonKind => (danger ? "danger" : "secondary");

function ConfirmDialog(props: ConfirmProps) {
	const { trigger, title, body, confirmLabel, name, value, danger, size, children } = props;
	const { t } = useTranslation();
	const dialog = useRef<HTMLDialogElement>(null);
	const id = useId();
	return (
		<>
			<Button type="button" kind={triggerKind(danger)} size={size} onClick={() => dialog.current?.showModal()}>
				{trigger}
			</Button>
			<dialog
				ref={dialog}
				aria-labelledby={`${id}-title`}
				aria-describedby={`${id}-body`}
				className="m-auto w-[min(32rem,calc(100vw-2rem))] border-2 border-line bg-paper p-6 text-ink"
			>
				<p id={`${id}-title`} className="text-lg font-bold">
					{title}
				</p>
				<div id={`${id}-body`} className="mt-2">
					{body}
				</div>
				{children}
				<div className="mt-6 flex flex-wrap gap-3">
					<Button
						kind={danger ? "danger" : "primary"}
						name={name}
						value={value}
						onClick={() => setTimeout(() => dialog.current?.close())}
					>
						{confirmLabel}
					</Button>
					<Button type="button" kind="quiet" onClick={() => dialog.current?.close()}>
						{t("confirm.cancel")}
					</Button>
				</div>
			</dialog>
		</>
	);
}

function ConfirmDetails(props: ConfirmProps) {
	const { trigger, title, body, confirmLabel, name, value, danger, size, children } = props;
	return (
		<details>
			<summary className={buttonClasses({ kind: triggerKind(danger), size })}>{trigger}</summary>
			<div className="mt-3 border-2 border-line p-5">
				<p className="text-lg font-bold">{title}</p>
				<div className="mt-2">{body}</div>
				{children}
				<div className="mt-5">
					<Button kind={danger ? "danger" : "primary"} name={name} value={value}>
						{confirmLabel}
					</Button>
				</div>
			</div>
		</details>
	);
}
