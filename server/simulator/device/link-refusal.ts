/** Why a device got no link, with what to do about it. */
import { faultCodes, faultKinds, type FaultCode } from '@shared/link';

export type LinkRefusalCode = FaultCode | 'UNREACHABLE' | 'NOT_TAUTBOOK';

export class LinkRefusal extends Error {
  override readonly name = 'LinkRefusal';

  constructor(
    readonly code: LinkRefusalCode,
    message: string,
    readonly wayOut: string,
    /** Whether trying again later may work. */
    readonly passing: boolean,
    /** HTTP status of the refused upgrade. */
    readonly status?: number,
  ) {
    super(message);
  }
}

export function unreachable(url: string, reason: string): LinkRefusal {
  return new LinkRefusal('UNREACHABLE', `No server answers at ${url} (${reason}).`, 'Start the server, or give its address with --url.', true);
}

/** What a refused upgrade means: its problem+json when it has one, else what its status says. */
export function refusedUpgrade(url: string, status: number, body: string): LinkRefusal {
  const code = codeIn(body) ?? faultCodes.find((each) => faultKinds[each].status === status);
  if (code !== undefined) return refusedFor(code, status);
  if (status === 503) return new LinkRefusal('UNREACHABLE', `The server at ${url} is not ready (503).`, 'Wait a moment and try again.', true, status);
  return new LinkRefusal('NOT_TAUTBOOK', `${url} answered with status ${status}, which is no device link.`, 'Give the address of a Tautbook server, as shown when it starts.', false, status);
}

export function refusedFor(code: FaultCode, status?: number): LinkRefusal {
  const { sentence, wayOut } = faultKinds[code];
  return new LinkRefusal(code, sentence, wayOut, code === 'DEVICE_BUSY', status);
}

function codeIn(body: string): FaultCode | undefined {
  try {
    const { code } = JSON.parse(body) as { code?: unknown };
    return faultCodes.find((each) => each === code);
  } catch {
    return undefined;
  }
}
