/** Where an attempt comes from. */
export interface Caller {
  address: string;
  userAgent: string;
}
