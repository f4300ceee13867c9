import { AxeBuilder } from '@axe-core/playwright'
import { chromium } from 'playwright-core'
import type { Browser, Page } from 'playwright-core'
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

/** A window of one person's own. A request that leaves the machine and an error of the page are faults of the product. */
async function openAs(who: string, width = 1440): Promise<Page> {
  const context = await browser.newContext({ viewport: { width, height: 1000 }, timezoneId: 'Europe/London', locale: 'en-GB' })
  const page = await context.newPage()
  page.on('request', (request) => {
    if (!request.url().startsWith(product.url) && !/^(data|blob):/.test(request.url())) faults.push(`left the machine: ${request.url()}`)
  })
  page.on('pageerror', error => faults.push(`${page.url()}: ${error.message}`))
  await page.goto(`${product.url}/sign-in`, { waitUntil: 'networkidle' })
  await page.fill('#email', `${who}@example.org`)
  await page.fill('#password', 'dawn-over-ferncombe')
  await page.getByRole('button', { name: 'Sign in' }).click()
  await page.waitForURL(`${product.url}/`)
  return page
}

async function expectAccessible(page: Page): Promise<void> {
  const { violations } = await new AxeBuilder({ page }).withTags(['wcag2a', 'wcag2aa', 'wcag21aa', 'wcag22aa']).analyze()
  expect(violations.map(each => `${page.url()} ${each.id}: ${each.nodes[0]?.html.slice(0, 160)}`)).toEqual([])
}

/** The findings of a sheet that must raise Now: cells 3+ with pain 4. */
async function fillSheet(page: Page): Promise<void> {
  await page.getByRole('heading', { name: 'Vision' }).waitFor()
  await page.getByRole('button', { name: '6/9' }).first().click()
  await page.getByRole('group', { name: 'Pain, 0 to 10' }).or(page.getByRole('radiogroup', { name: 'Pain, 0 to 10' })).locator('input').nth(4).check({ force: true })
  await page.fill('#iopMmHg', '16')
  await page.locator('#iopMmHg').blur()
  const choose = (name: string, index: number) => page.locator(`#${name}`).locator('input').nth(index).check({ force: true })
  await choose('oedemaGrade', 1)
  await choose('cells', 4)
  await choose('flare', 1)
  await choose('wound', 0)
  await choose('chamberDepth', 0)
  await choose('lensPosition', 0)
}

test('the loop of the morning: booked, told, confirmed, arrived, signed, on the surgeon’s open page within two seconds, answered, closed, and seen again', async () => {
  const surgeon = await openAs('tobias.quillfeather')
  const connected = surgeon.waitForResponse(answer => answer.url().endsWith('/live') && answer.ok())
  await surgeon.goto(`${product.url}/escalations`, { waitUntil: 'load' })
  await connected
  await surgeon.getByText('Wound leaking').first().waitFor()

  const nurse = await openAs('maren.oxlade')
  await nurse.goto(`${product.url}/clinic`, { waitUntil: 'networkidle' })
  await nurse.getByRole('button', { name: /^Book \d\d:\d\d, Room/ }).click()
  const said = await nurse.getByText(/^Booked: /).innerText()
  const name = /^Booked: ([^,]+),/.exec(said)?.[1] ?? ''
  const { rows: [one] } = await product.pool.query('select p.id, p.patient_id, p.eye, t.phone, v.id visit_id from pathways p join patients t on t.id = p.patient_id join visits v on v.pathway_id = p.id and v.kind = \'day-one\' and v.state = \'booked\' where t.name = $1', [name])
  expect(one).toBeDefined()

  // By day the reminder of a visit that is near goes out at once; at night it becomes a call, and the patient's own text still counts.
  const { rows: [reminder] } = await product.pool.query('select state from messages where visit_id = $1 and kind = \'dayone.morning\'', [one.visit_id])
  if (reminder.state === 'held') expect(product.fakes.store.texts.filter(text => text.to === one.phone)).toEqual([])
  else await expect.poll(() => product.fakes.store.texts.filter(text => text.to === one.phone).length, { timeout: 10_000 }).toBe(1)
  const reply = await fetch(`${product.url}/api/demo/reply`, { method: 'POST', headers: { 'content-type': 'application/json', 'x-dawnward-csrf': '1' }, body: JSON.stringify({ from: one.phone, body: 'YES' }) })
  expect(reply.status).toBe(200)

  await nurse.goto(`${product.url}/`, { waitUntil: 'networkidle' })
  const row = nurse.getByRole('listitem').filter({ has: nurse.getByRole('link', { name, exact: true }) }).filter({ hasText: /Expected|Mark arrived/ })
  await row.getByText('Expected, confirmed by text').waitFor({ timeout: 10_000 })
  await row.getByRole('button', { name: 'Mark arrived' }).click()
  await nurse.getByRole('listitem').filter({ has: nurse.getByRole('link', { name, exact: true }) }).getByRole('button', { name: 'Send in' }).click()

  const optometrist = await openAs('ivo.hartnell')
  await optometrist.goto(`${product.url}/review/${one.visit_id}`, { waitUntil: 'networkidle' })
  await fillSheet(optometrist)
  const sign = optometrist.getByRole('button', { name: 'Sign and raise Now' })
  await sign.waitFor()
  await expectAccessible(optometrist)
  const answered = optometrist.waitForResponse(answer => answer.url().endsWith('/sign'))
  await sign.click()
  expect((await answered).status()).toBe(200)
  const signedAt = performance.now()
  await surgeon.getByRole('link', { name, exact: true }).waitFor({ timeout: 2_000 })
  const shownAfter = performance.now() - signedAt
  expect(shownAfter).toBeLessThan(2_000)
  await optometrist.getByText('is raised', { exact: false }).waitFor()
  const { rows: [raised] } = await product.pool.query('select id, number, urgency from escalations where pathway_id = $1', [one.id])
  expect(raised.urgency).toBe('now')
  await expect.poll(() => product.fakes.store.texts.some(text => text.to === '+447700900103' && text.body.includes(String(raised.number))), { timeout: 10_000 }).toBe(true)
  expect(product.fakes.store.texts.filter(text => text.to === '+447700900103').every(text => !text.body.includes(name))).toBe(true)
  console.log(`shown to the surgeon ${Math.round(shownAfter)} ms after signing`)

  await surgeon.getByRole('radio', { name: 'I am ringing now' }).check({ force: true })
  await surgeon.getByRole('button', { name: /^Acknowledge A?/ }).first().click()
  await surgeon.getByRole('button', { name: `Close it ${name}` }).click()
  await surgeon.getByText('has it: I am ringing now').waitFor()
  await surgeon.getByLabel('What was done').fill('Seen at once, treated, recheck tomorrow.')
  await surgeon.getByRole('button', { name: 'Close with this' }).click()
  await surgeon.getByRole('link', { name, exact: true }).waitFor({ state: 'detached' })
  await surgeon.getByRole('button', { name: 'Show closed escalations' }).click()
  await surgeon.getByText('Seen at once, treated, recheck tomorrow.').first().waitFor()

  await nurse.goto(`${product.url}/patient/${one.patient_id}`, { waitUntil: 'networkidle' })
  await expectAccessible(nurse)
  await nurse.getByRole('link', { name: 'Book the next visit' }).first().click()
  await nurse.waitForURL(/kind=follow-up/)
  await nurse.getByRole('button', { name: /^Book \d\d:\d\d/ }).last().click()
  await nurse.getByText(/^Booked: /).waitFor()
  const { rows: booked } = await product.pool.query('select 1 from visits where pathway_id = $1 and kind = \'first-week\' and state = \'booked\'', [one.id])
  expect(booked).toHaveLength(1)
  expect(faults).toEqual([])
})

test('sign-in, Today, pathways, clinics, escalations and messages have no violation of WCAG 2.2 AA that axe can find, wide and narrow', async () => {
  for (const width of [1440, 390]) {
    const nurse = await openAs('maren.oxlade', width)
    for (const path of ['/', '/pathways', '/clinic', '/escalations', '/messages']) {
      await nurse.goto(`${product.url}${path}`, { waitUntil: 'load' })
      await nurse.locator('h1').first().waitFor()
      await expectAccessible(nurse)
    }
  }
  const visitor = await (await browser.newContext()).newPage()
  await visitor.goto(`${product.url}/sign-in`, { waitUntil: 'load' })
  await expectAccessible(visitor)
  expect(faults).toEqual([])
})
