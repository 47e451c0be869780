import { parentPort, workerData } from 'node:worker_threads';
import { openReadingConnection } from '../db/open.ts';
import type { PointsAnswer, PointsQuestion } from './points-thread.ts';
import { readPoints } from './read-points.ts';

/** Runs on a thread of its own, so that a year of samples does not stall everything else. */
const connection = openReadingConnection((workerData as { databaseFile: string }).databaseFile);

parentPort?.on('message', ({ id, request }: PointsQuestion) => {
  let answer: PointsAnswer;
  try {
    answer = { id, points: readPoints(connection, request) };
  } catch (error) {
    answer = { id, error: error instanceof Error ? error.message : String(error) };
  }
  parentPort?.postMessage(answer);
});
