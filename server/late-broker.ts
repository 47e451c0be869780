import type { Broker } from '../broker/broker.ts';
import type { DevicePublisher } from './orders/device-publisher.ts';

/** Stands for the broker while the services that publish through it, and that it asks in turn, are built. */
export interface LateBroker extends DevicePublisher {
  disconnect(deviceId: string): void;
  /** @param isUp for a broker that may be away for a while. */
  set(broker: Broker, isUp?: () => boolean): void;
  isUp(): boolean;
}

export function createLateBroker(): LateBroker {
  let broker: Broker | null = null;
  let isBrokerUp = () => false;
  return {
    publish: (topic, payload, options) =>
      broker === null ? Promise.reject(new Error('The broker is not up')) : broker.publish(topic, payload, options),
    isConnected: (deviceId) => broker?.isConnected(deviceId) ?? false,
    disconnect: (deviceId) => broker?.disconnect(deviceId),
    set(value, isUp = () => true) {
      broker = value;
      isBrokerUp = isUp;
    },
    isUp: () => isBrokerUp(),
  };
}
