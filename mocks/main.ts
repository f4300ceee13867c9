import { startFakes } from '#mocks/start-fakes'

const port = (name: string, otherwise: number) => Number(process.env[name] ?? otherwise)
const fakes = await startFakes({
  textPort: port('DAWNWARD_FAKE_TEXT_PORT', 3901), mailPort: port('DAWNWARD_FAKE_MAIL_PORT', 3902), controlPort: port('DAWNWARD_FAKE_CONTROL_PORT', 3903),
  origin: process.env.DAWNWARD_ORIGIN ?? 'http://127.0.0.1:3000', account: process.env.DAWNWARD_TEXT_ACCOUNT ?? '', token: process.env.DAWNWARD_TEXT_TOKEN ?? '',
})
console.log(JSON.stringify({ text: fakes.textUrl, mail: fakes.mailUrl, control: fakes.controlUrl }))
process.once('SIGTERM', () => void fakes.stop().then(() => process.exit(0)))
process.once('SIGINT', () => void fakes.stop().then(() => process.exit(0)))
