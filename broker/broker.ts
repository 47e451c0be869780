import type { Uplink } from '#shared/mqtt/topics.ts';

/** A message of a device that passed the fence. */
export interface DeviceMessage {
  readonly deviceId: string;
  readonly word: Uplink;
  readonly payload: Buffer;
  /** True only for an old message that a broker had kept, handed over on subscribing: it is no sign of life. */
  readonly retained: boolean;
  /** True when the broker sends it in the name of a device that went away. */
  readonly isWill: boolean;
}

/** What the broker asks of its owner. It knows no tables and decides nothing that these can decide. */
export interface BrokerPolicy {
  /** True when `password` is the one of the device `username`. */
  authenticate(username: string, password: string): Promise<boolean>;
  /**
   * Called in the order of arrival; the acknowledgement goes out once the promise resolves.
   * A rejection closes the connection without one, so that the device sends the message again.
   */
  receive(message: DeviceMessage): Promise<void>;
  /** The device's first connection is up. */
  connected(deviceId: string): void;
  /** The device's last connection is gone. */
  disconnected(deviceId: string): void;
  /** The device listens for orders from now on: what waits for it can be sent. */
  listening?(deviceId: string): void;
}

export interface PublishOptions {
  readonly retain: boolean;
  readonly qos: 0 | 1;
}

/** The port through which the server speaks with its devices, whoever runs the broker. */
export interface Broker {
  /** The TCP port that devices connect to. */
  readonly port: number;
  publish(topic: string, payload: string | Buffer, options: PublishOptions): Promise<void>;
  isConnected(deviceId: string): boolean;
  /** Cuts every connection of the device, and those that are just signing in with the password of before. */
  disconnect(deviceId: string): void;
  close(): Promise<void>;
}

/** What an operator wants to know of the broker; never a payload or a password. */
export interface BrokerLog {
  info(detail: object, text: string): void;
  warn(detail: object, text: string): void;
}
