/** How messages get to the devices; the broker stands behind it. */
export interface DevicePublisher {
  /** Resolves once the broker has taken the message. */
  publish(topic: string, payload: string, options: { retain: boolean; qos: 0 | 1 }): Promise<void>;
  /** True while the device holds a connection over which an order can reach it. */
  isConnected(deviceId: string): boolean;
}
