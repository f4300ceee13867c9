import { AxeBuilder } from '@axe-core/playwright'
import { chromium } from 'playwright-core'
import type { Browser, BrowserContext, Page } from 'playwright-core'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'

let product: Product
let browser: Browser
const faults: string[] = []

beforeAll(async () => {
  product = await startProduct()
  browser = await chromium.launch({ executablePath: '/usr/bin/chromium', args: ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'] })
})
afterAll(async () => {
  await browser?.close()
  await product?.stop()
})

async function contextOf(who: string, width = 1440): Promise<BrowserContext> {
  const context = await browser.newContext({ viewport: { width, height: 1000 }, timezoneId: 'Europe/London', locale: 'en-GB' })
  const answer = await context.request.post(`${product.url}/api/people/sign-in`, { headers: { 'x-dawnward-csrf': '1' }, data: { email: `${who}@example.org`, password: 'dawn-over-ferncombe' } })
  expect(answer.status()).toBe(200)
  return context
}
async function openAs(who: string, path: string, width = 1440): Promise<Page> {
  const page = await (await contextOf(who, width)).newPage()
  page.on('pageerror', error => faults.push(`${page.url()}: ${error.message}`))
  await page.goto(`${product.url}${path}`, { waitUntil: 'networkidle' })
  return page
}
/** In the dim room only the colours differ, so only their contrast is asked again. */
async function violations(page: Page, room: 'lit' | 'dim'): Promise<string[]> {
  const axe = new AxeBuilder({ page })
  const { violations: found } = await (room === 'lit' ? axe.withTags(['wcag2a', 'wcag2aa', 'wcag21aa', 'wcag22aa']) : axe.withRules(['color-contrast'])).analyze()
  return found.map(each => `${page.url()} ${each.id}: ${each.nodes[0]?.html.slice(0, 200)}`)
}
const visitOf = async (name: string) => (await product.pool.query('select v.id from visits v join patients t on t.id = v.patient_id where t.name = $1 order by v.starts_at desc limit 1', [name])).rows[0].id as string

test.each([1440, 390])('Today, clinics, sessions, the proposal, escalations and the review have no violation of WCAG 2.2 AA that axe can find, lit and dim, at %i px', async (width) => {
  const [sheet, signed] = await Promise.all([visitOf('Casimir Underhay'), visitOf('Winifred Saltonby')])
  const seen: string[] = []
  for (const [who, paths] of [['corin.vellacott', ['/clinic?view=sessions']], ['maren.oxlade', ['/', '/clinic', '/clinic?view=proposal', '/clinic?kind=follow-up']], ['tobias.quillfeather', ['/escalations', `/review/${signed}`]], ['ivo.hartnell', [`/review/${sheet}`]], ['petra.lanyon', ['/']]] as const) {
    const page = await (await contextOf(who, width)).newPage()
    for (const path of paths) {
      await page.goto(`${product.url}${path}`, { waitUntil: 'networkidle' })
      await page.locator('h1').first().waitFor()
      seen.push(...await violations(page, 'lit'))
      await page.evaluate(() => document.documentElement.setAttribute('data-theme', 'dim'))
      seen.push(...await violations(page, 'dim'))
      const wide = await page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth)
      if (wide > 0) seen.push(`${path} is ${wide} px wider than the window`)
    }
    await page.context().close()
  }
  expect(seen).toEqual([])
})

test('a review sheet is filled and signed by keyboard alone, and amended as a new version with its reason', async () => {
  const visitId = await visitOf('Benedek Farrow')
  const page = await openAs('ivo.hartnell', `/review/${visitId}`)
  await page.getByRole('button', { name: '6/9' }).first().focus()
  await page.keyboard.press('Enter')
  await page.getByRole('radio', { name: /^1\b/ }).first().or(page.locator('#painScore input').nth(1)).first().focus()
  await page.keyboard.press('Space')
  await page.evaluate(() => (document.activeElement as HTMLElement).blur())
  await page.keyboard.press('p')
  await page.keyboard.type('15')
  await page.keyboard.press('Tab')
  for (const [key, arrows] of [['o', 0], ['c', 1], ['f', 0], ['w', 0], ['l', 0]] as const) {
    await page.evaluate(() => (document.activeElement as HTMLElement).blur())
    await page.keyboard.press(key)
    await page.keyboard.press('Space')
    for (let step = 0; step < arrows; step++) await page.keyboard.press('ArrowRight')
  }
  await page.locator('#chamberDepth input').first().focus()
  await page.keyboard.press('Space')
  await page.getByRole('button', { name: 'Sign, nothing to raise' }).waitFor()
  await page.keyboard.press('Control+Enter')
  await page.getByText('Signed. Nothing was raised.').waitFor()
  const { rows } = await product.pool.query('select version, cells, iop_mmhg from reviews where visit_id = $1', [visitId])
  expect(rows).toEqual([{ version: 1, cells: '0.5+', iop_mmhg: 15 }])

  await page.getByRole('button', { name: 'Amend' }).click()
  await page.fill('#iopMmHg', '19')
  await page.locator('#iopMmHg').blur()
  await page.getByRole('button', { name: 'Sign, nothing to raise' }).click()
  await page.getByText('Say why it is amended.').first().waitFor()
  await page.getByLabel('Why it is amended').fill('Read from the wrong line')
  await page.getByRole('button', { name: 'Sign, nothing to raise' }).click()
  await page.getByText('version 2', { exact: false }).first().waitFor()
  const { rows: versions } = await product.pool.query('select version, iop_mmhg, amend_reason from reviews where visit_id = $1 order by version', [visitId])
  expect(versions).toEqual([{ version: 1, iop_mmhg: 15, amend_reason: null }, { version: 2, iop_mmhg: 19, amend_reason: 'Read from the wrong line' }])
  expect(faults).toEqual([])
})

test('the proposal is confirmed as a whole, and what does not fit says what would help', async () => {
  const page = await openAs('maren.oxlade', '/clinic?view=proposal')
  const before = (await product.pool.query('select count(*)::int n from visits')).rows[0].n
  await page.getByText('Nothing is booked or sent until then').waitFor()
  await page.getByRole('button', { name: /^Change / }).first().click()
  await page.getByRole('button', { name: /^Book only this one/ }).waitFor()
  expect((await product.pool.query('select count(*)::int n from visits')).rows[0].n).toBe(before)
  await page.getByRole('button', { name: /^Book( all)? (one|two|three|four|five|six|seven|eight|nine|ten)$/ }).click()
  await page.getByText('booked, and the messages are on their way.', { exact: false }).waitFor()
  expect((await product.pool.query('select count(*)::int n from visits')).rows[0].n).toBeGreaterThan(before)
  for (const row of await page.getByText('No place found').all()) expect(await row.isVisible()).toBe(true)
})

test('a coordinator makes a session, closes a place of it, and closes it', async () => {
  const page = await openAs('corin.vellacott', `/clinic?view=sessions&date=${new Date(Date.now() + 30 * 86_400_000).toISOString().slice(0, 10)}`)
  await page.fill('#new-room', 'Room 7')
  await page.fill('#new-time', '25:99')
  await page.getByRole('button', { name: 'Make the session' }).click()
  await page.getByText('Use a time such as 08:30.').waitFor()
  await page.fill('#new-time', '09:00')
  await page.fill('#new-places', '3')
  await page.getByRole('button', { name: 'Make the session' }).click()
  await page.getByText('The session is made.').waitFor()
  await page.getByRole('button', { name: 'Change Room 7, 09:00' }).click()
  await page.getByRole('button', { name: 'Close 09:10' }).click()
  await page.getByText('2 places, 0 taken').waitFor()
  await page.getByRole('button', { name: 'Close the whole session' }).click()
  await page.getByText('The session is closed.').waitFor()
  expect(faults).toEqual([])
})
