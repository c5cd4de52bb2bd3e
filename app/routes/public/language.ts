export function loader() {
	return new Response(null, { status: 404 });
}
