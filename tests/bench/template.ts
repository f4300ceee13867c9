import setUp from '#tests/support/global-setup'

/** The template database that the tests clone, brought to the newest schema with the demo scenario. */
await setUp()
process.exit(0)
