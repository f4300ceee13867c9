import pino from 'pino'

/** Structured logs. Nothing clinical, no names, no addresses: ids and codes only. */
export const log = pino({ level: process.env.DAWNWARD_LOG ?? 'info', base: undefined })
