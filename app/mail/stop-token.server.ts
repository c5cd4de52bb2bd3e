import { env } from "#app/lib/env.server.ts";
import { idOfToken, tokenOf } from "./id-token.server.ts";

/** The token that stops an operation's mail. */
export const stopTokenOf = (operationId: string): string => tokenOf("stop mail", operationId);

/** The operation whose mail a token stops; all that was not made by `stopTokenOf` gives the same undefined. */
export const operationOfStopToken = (token: string): string | undefined => idOfToken("stop mail", token);

/** The address for a mail's headers and its last line. */
export function stopAddressOf(operationId: string): string {
	return `${env().BASE_URL}/stop-mail/${stopTokenOf(operationId)}`;
}
