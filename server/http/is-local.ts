import type { IncomingMessage } from 'node:http';
import { BlockList } from 'node:net';

const local = new BlockList();
local.addSubnet('127.0.0.0', 8, 'ipv4');
local.addSubnet('10.0.0.0', 8, 'ipv4');
local.addSubnet('172.16.0.0', 12, 'ipv4');
local.addSubnet('192.168.0.0', 16, 'ipv4');
local.addSubnet('169.254.0.0', 16, 'ipv4');
local.addAddress('::1', 'ipv6');
local.addSubnet('fc00::', 7, 'ipv6');
local.addSubnet('fe80::', 10, 'ipv6');

/** True for a request from this machine or its own network that came here directly, not through a proxy. */
export function isLocal(request: IncomingMessage): boolean {
  if (request.headers['x-forwarded-for'] !== undefined || request.headers.forwarded !== undefined) return false;
  const address = (request.socket.remoteAddress ?? '').replace(/^::ffff:/, '');
  if (address === '') return false;
  return local.check(address, address.includes(':') ? 'ipv6' : 'ipv4');
}
