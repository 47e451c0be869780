// The order matters: the schemas of the contract are made while the routes load.
import './zod-without-eval.ts';
import 'expo-router/entry';
