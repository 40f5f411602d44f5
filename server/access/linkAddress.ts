import type { Request } from 'express';
import { BlockList, isIP } from 'node:net';
import type { Config } from '../config.ts';
import { Clash } from '../errors.ts';
import { log } from '../log.ts';
import { say } from '../sentences/say.ts';

/** Where links of this installation lead. What a request calls the server is believed only so far, since it could be forged to send people elsewhere. */
export interface LinkAddress {
  /** For links that open an account: PUBLIC_URL or this machine itself, else null. */
  forAccount: (request: Request) => string | null;
  /** For links in mails that a person sends: a name of the own network is believed too, any other refused with what to set. */
  forMail: (request: Request) => string;
  /** For paper that whoever asks is handed: what they call the server. */
  forPaper: (request: Request) => string;
}

export function linkAddress({ publicUrl }: Config): LinkAddress {
  return {
    forAccount: (request) => publicUrl || addressIf(request, isOwnMachine),
    forMail: (request) => {
      const address = publicUrl || addressIf(request, isOwnNetwork);
      if (address) return address;
      log.error('no mail with a link was written', new Error('PUBLIC_URL is needed for links in mails'), { path: request.path });
      throw new Clash('noPublicUrl', say('noPublicUrl'));
    },
    forPaper: (request) => publicUrl || `${request.protocol}://${request.get('host') ?? 'localhost'}`,
  };
}

const ownMachine = new BlockList();
ownMachine.addSubnet('127.0.0.0', 8);
ownMachine.addAddress('::1', 'ipv6');
/** Addresses that lead to nobody outside: RFC 1918, RFC 3927, RFC 4193 and RFC 4291. */
const ownNetwork = new BlockList();
for (const [net, prefix] of [['10.0.0.0', 8], ['172.16.0.0', 12], ['192.168.0.0', 16], ['169.254.0.0', 16]] as const) ownNetwork.addSubnet(net, prefix);
for (const [net, prefix] of [['fc00::', 7], ['fe80::', 10]] as const) ownNetwork.addSubnet(net, prefix, 'ipv6');
/** Names that no public register gives: a single word, RFC 6762, RFC 8375, and the one that ICANN keeps for private use. */
const ownName = /^[^.]+$|\.(local|home\.arpa|internal)$/;

const isIn = (list: BlockList, host: string) => isIP(host) > 0 && list.check(host, isIP(host) === 6 ? 'ipv6' : 'ipv4');
const isOwnMachine = (host: string) => host === 'localhost' || isIn(ownMachine, host);
const isOwnNetwork = (host: string) => isOwnMachine(host) || (isIP(host) > 0 ? isIn(ownNetwork, host) : ownName.test(host));

/** The server as the request calls it, read as a browser would read it, where that is believed. */
function addressIf(request: Request, isBelieved: (host: string) => boolean): string | null {
  const called = `${request.protocol}://${request.get('host') ?? ''}`;
  if (!URL.canParse(called)) return null;
  const { hostname, origin } = new URL(called);
  return isBelieved(hostname.replace(/^\[|\]$/g, '')) ? origin : null;
}
