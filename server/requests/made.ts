/** What a create answers: the thing, and whether the same request had made it before. */
export interface Made<Thing> {
  value: Thing;
  isRepeated: boolean;
}
