import type { Config } from "@react-router/dev/config";

export default {
	ssr: true,
	// Guards and sessions are middleware; without this flag they would be skipped in silence.
	future: { v8_middleware: true },
} satisfies Config;
