import { z } from "zod";
import { createSignIn } from "./app.ts";

const { OAUTH_ISSUER, BASE_URL, OAUTH_CLIENT_ID, OAUTH_CLIENT_SECRET } = z
	.object({
		OAUTH_ISSUER: z.url(),
		BASE_URL: z.url(),
		OAUTH_CLIENT_ID: z.string().min(1),
		OAUTH_CLIENT_SECRET: z.string().min(1),
	})
	.parse(process.env);

const client = {
	id: OAUTH_CLIENT_ID,
	secret: OAUTH_CLIENT_SECRET,
	redirectUris: [`${BASE_URL.replace(/\/$/, "")}/sign-in/callback`],
};
const app = await createSignIn({ issuer: OAUTH_ISSUER.replace(/\/$/, ""), client });
// This machine only: whoever reaches this page can sign in as anybody.
app.listen(Number(new URL(OAUTH_ISSUER).port), "127.0.0.1", (error) => {
	if (error) throw error;
	console.log(`demo sign-in at ${OAUTH_ISSUER}`);
});
