/** As the nearest proxy tells it; without a proxy all visitors share one count, which locks out none who has a link. */
export function addressOf(request: Request): string {
	return request.headers.get("x-forwarded-for")?.split(",").at(-1)?.trim().slice(0, 100) || "direct";
}
