import { config } from '../config';
import { connect } from './connect';

export type { Db } from './connect';
export type { Database, RunState } from './tables';

const connection = connect(config.databaseUrl);

/** The application's one query builder; repository functions take it as their first argument. */
export const db = connection.db;

/** The pool under it, for the packages that speak to pg directly (sessions, rate limits). */
export const pool = connection.pool;
