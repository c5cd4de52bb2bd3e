import type { ButtonHTMLAttributes, ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Link, type LinkProps } from "react-router";
import { classes } from "./classes.ts";
import { useHeldPost } from "./use-held-post.ts";

export type ButtonKind = "primary" | "secondary" | "quiet" | "danger";
/** A small one is as large as any other where fingers press it. */
export type ButtonSize = "normal" | "small";
type Look = { kind?: ButtonKind; size?: ButtonSize };

const kinds: Record<ButtonKind, string> = {
	primary: "border-damson bg-damson text-on-damson hover:border-damson-deep hover:bg-damson-deep",
	secondary: "border-damson bg-paper text-damson hover:bg-damson-wash",
	quiet: "border-transparent bg-transparent text-damson underline underline-offset-4 hover:bg-damson-wash",
	danger: "border-stop bg-paper text-stop hover:bg-stop hover:text-on-stop",
};

/** How a button looks, for a link, a button and a summary alike. */
export function buttonClasses({ kind = "primary", size = "normal" }: Look = {}): string {
	return classes(
		"inline-flex items-center justify-center gap-2 rounded-plat border-2 text-center font-bold no-underline",
		"transition-colors aria-disabled:cursor-progress aria-disabled:opacity-60",
		size === "small" ? "min-h-9 px-3 py-1 text-sm pointer-coarse:min-h-11" : "min-h-11 px-5 py-2",
		kinds[kind],
	);
}

type ButtonProps = Look & { busy?: boolean; children: ReactNode } & Pick<
		ButtonHTMLAttributes<HTMLButtonElement>,
		| "type"
		| "name"
		| "value"
		| "onClick"
		| "id"
		| "form"
		| "formAction"
		| "aria-label"
		| "aria-describedby"
		| "aria-expanded"
	>;

/** A busy button stays in place and in focus; a second tap does nothing. */
export function Button({ kind, size, busy: isSending, children, type = "submit", onClick, ...rest }: ButtonProps) {
	const { t } = useTranslation();
	// What waits for somebody to sign in can be sent again.
	const isHeld = useHeldPost() !== null;
	const busy = isSending && !isHeld;
	return (
		<button
			{...rest}
			type={type}
			aria-disabled={busy || undefined}
			onClick={busy ? (event) => event.preventDefault() : onClick}
			className={buttonClasses({ kind, size })}
		>
			{children}
			{busy && <span className="font-normal"> {t("button.busy")}</span>}
		</button>
	);
}

type ButtonLinkProps = Look & Omit<LinkProps, "className">;

export function ButtonLink({ kind, size, ...rest }: ButtonLinkProps) {
	return <Link {...rest} data-button="" className={buttonClasses({ kind, size })} />;
}
