/** Who is signed in; looked up at each request. */
export interface Person {
  userId: string;
  sessionId: string;
}
