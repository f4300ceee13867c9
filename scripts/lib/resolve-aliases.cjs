// How Nuxt's `~/` is found by the check of the arrows; our own `#...` is resolved from package.json like Node does.
const { resolve } = require('node:path')

module.exports = { resolve: { alias: { '~': resolve(__dirname, '../../app') } } }
