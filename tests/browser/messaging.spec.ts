import { AxeBuilder } from '@axe-core/playwright'
import { createHash, randomBytes } from 'node:crypto'
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

interface Patient { patient: string, pathway: string, visit: string, born: string, path: string }

/** A patient who was operated and has a visit that they have not answered, and a link to their page as a text would carry it. */
async function linkOf(order: number): Promise<Patient> {
  const { rows } = await product.pool.query('select p.id as patient, w.id as pathway, v.id as visit, p.birth_date::text as born from patients p join pathways w on w.patient_id = p.id join visits v on v.pathway_id = w.id where v.state = \'booked\' and w.operated_at is not null and w.operated_at < now() and v.starts_at > now() - interval \'10 hours\' order by v.starts_at, v.id offset $1 limit 1', [order])
  const [row] = rows
  await product.pool.query('update visits set confirmed_at = null, cannot_come_at = null where id = $1', [row.visit])
  const token = randomBytes(32).toString('base64url')
  await product.pool.query('insert into patient_links (id, token_hash, patient_id, pathway_id, visit_id, created_at, expires_at) values (gen_random_uuid(), $1, $2, $3, $4, now(), now() + interval \'30 days\')', [createHash('sha256').update(token).digest('hex'), row.patient, row.pathway, row.visit])
  return { ...row, path: `/v/${token}` }
}

async function openPage(width = 390): Promise<Page> {
  const context = await browser.newContext({ viewport: { width, height: 844 }, timezoneId: 'Europe/London', locale: 'en-GB' })
  const page = await context.newPage()
  page.on('request', (request) => {
    if (!request.url().startsWith(product.url) && !/^(data|blob):/.test(request.url())) faults.push(`left the machine: ${request.url()}`)
  })
  page.on('pageerror', error => faults.push(`${page.url()}: ${error.message}`))
  return page
}

async function enterBirthDate(page: Page, born: string): Promise<void> {
  const [year = '', month = '', day = ''] = born.split('-')
  const boxes = page.locator('fieldset input')
  await boxes.nth(0).fill(day)
  await boxes.nth(1).fill(month)
  await boxes.nth(2).fill(year)
  await page.locator('form button[type=submit]').click()
}

async function expectAccessible(page: Page, theme: 'light' | 'dim' = 'light'): Promise<void> {
  await page.evaluate(wanted => void (document.documentElement.dataset.theme = wanted), theme)
  const { violations } = await new AxeBuilder({ page }).withTags(['wcag2a', 'wcag2aa', 'wcag21aa', 'wcag22aa']).analyze()
  expect(violations.map(each => `${new URL(page.url()).pathname.slice(0, 4)} ${theme} ${each.id}: ${each.nodes[0]?.html.slice(0, 160)}`)).toEqual([])
}

async function accessibleInBothThemes(page: Page): Promise<void> {
  for (const theme of ['light', 'dim'] as const) await expectAccessible(page, theme)
}

test('a patient opens the link with the birth date, confirms the visit, and takes the calendar file along', async () => {
  const { visit, born, path } = await linkOf(0)
  const page = await openPage()
  await page.goto(`${product.url}${path}`, { waitUntil: 'networkidle' })
  await accessibleInBothThemes(page)
  await enterBirthDate(page, born)
  await page.getByRole('button', { name: 'Yes, I will be there' }).waitFor()
  await accessibleInBothThemes(page)
  await page.getByRole('button', { name: 'Yes, I will be there' }).click()
  await page.getByText('You told us that you are coming.').waitFor()
  const { rows } = await product.pool.query('select confirmed_at from visits where id = $1', [visit])
  expect(rows[0].confirmed_at).not.toBeNull()

  const [file] = await Promise.all([page.waitForEvent('download'), page.getByRole('link', { name: 'Put it in my calendar' }).click()])
  expect(file.suggestedFilename()).toBe('visit.ics')

  const targets = await page.locator('main button, main a, main select, main label:has(input), main summary').evaluateAll(nodes => nodes.map(node => node.getBoundingClientRect()).filter(box => box.height > 0 && box.height < 24).length)
  expect(targets).toBe(0)
  await page.setViewportSize({ width: 320, height: 700 })
  expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(320)
})

test('the page speaks the language that is chosen, from right to left where it is read so', async () => {
  const { born, path } = await linkOf(1)
  const page = await openPage()
  await page.goto(`${product.url}${path}?l=pl`, { waitUntil: 'networkidle' })
  await page.getByRole('button', { name: 'Pokaż wizytę' }).waitFor()
  await enterBirthDate(page, born)
  await page.getByRole('button', { name: 'Tak, przyjdę' }).waitFor()
  await page.locator('select').first().selectOption('ar')
  await page.getByRole('button', { name: 'نعم، سأحضر' }).waitFor()
  expect(await page.evaluate(() => [document.documentElement.lang, document.documentElement.dir])).toEqual(['ar', 'rtl'])
  await accessibleInBothThemes(page)
})

test('a red answer raises an escalation, the surgeon\'s telephone has it, and the patient is told to ring', async () => {
  const { pathway, visit, born, path } = await linkOf(2)
  const page = await openPage()
  await page.goto(`${product.url}${path}`, { waitUntil: 'networkidle' })
  await enterBirthDate(page, born)
  await page.getByRole('button', { name: 'Tell the unit' }).click()
  await page.getByText('Choose what is true now, or write it.').waitFor()

  await page.getByLabel('A curtain or shadow over part of my sight').check()
  await page.getByRole('button', { name: 'Tell the unit' }).click()
  await page.getByRole('heading', { name: 'Ring us now.' }).waitFor()
  expect(await page.locator('a[href^="tel:"]').first().innerText()).toMatch(/01632/)
  await page.getByText('Go to the nearest emergency department.', { exact: false }).first().waitFor()
  await accessibleInBothThemes(page)
  const { rows } = await product.pool.query('select urgency, state from escalations where pathway_id = $1 and state <> \'closed\'', [pathway])
  expect(rows).toEqual([{ urgency: 'now', state: 'open' }])
  await expect.poll(() => product.fakes.store.texts.some(text => /^Dawnward: Now\./.test(text.body)), { timeout: 10_000 }).toBe(true)

  await page.getByLabel('Tell us more, in your own words').fill('Since this morning, about seven.')
  await page.getByRole('button', { name: 'Send this too' }).click()
  await page.getByText('Since this morning, about seven.', { exact: false }).first().waitFor()
  await page.getByRole('heading', { name: 'Ring us now.' }).waitFor()
  const { rows: kept } = await product.pool.query('select state from visits where id = $1', [visit])
  expect(kept[0].state).toBe('booked')
})

test('a wrong birth date opens nothing, five lock the link, and the right one is then refused alike', async () => {
  const { born, path } = await linkOf(3)
  const page = await openPage()
  await page.goto(`${product.url}${path}`, { waitUntil: 'networkidle' })
  for (let time = 0; time < 5; time++) {
    const [answer] = await Promise.all([page.waitForResponse(response => response.url().endsWith('/open')), enterBirthDate(page, '1901-01-01')])
    expect(answer.ok()).toBe(false)
    await page.getByText('We cannot open this page with that date.', { exact: false }).waitFor()
  }
  const [answer] = await Promise.all([page.waitForResponse(response => response.url().endsWith('/open')), enterBirthDate(page, born)])
  expect(answer.ok()).toBe(false)
  expect(await page.getByRole('button', { name: 'Show my visit' }).count()).toBe(1)
})

test('the nurse reads the words, sends a failed text again, sees the day and the templates; the demo\'s page moves the clock', async () => {
  const { patient } = await linkOf(4)
  const { rows: [who] } = await product.pool.query('select phone, name, site_id from patients where id = $1', [patient])
  const { rows: [pathway] } = await product.pool.query('select id from pathways where patient_id = $1 limit 1', [patient])
  await product.pool.query('insert into messages (id, kind, recipient_key, subject_key, occasion, channel, patient_id, pathway_id, site_id, to_address, body, state, last_error, due_at, expires_at, created_at) values (gen_random_uuid(), \'reply.hand\', $1, \'test\', \'one\', \'text\', $2, $3, $4, $5, \'Please ring us.\', \'failed\', \'30003\', now(), now() + interval \'20 hours\', now())', [`patient:${patient}`, patient, pathway.id, who.site_id, who.phone])
  const nurse = await openPage(1440)
  await nurse.goto(`${product.url}/sign-in`, { waitUntil: 'networkidle' })
  await nurse.fill('#email', 'maren.oxlade@example.org')
  await nurse.fill('#password', 'dawn-over-ferncombe')
  await nurse.getByRole('button', { name: 'Sign in' }).click()
  await nurse.waitForURL(`${product.url}/`)
  await nurse.goto(`${product.url}/messages`, { waitUntil: 'load' })
  await nurse.getByText('Since this morning, about seven.', { exact: false }).first().waitFor()
  for (const tab of [/^Replies/, 'Going out today', 'Templates', /^Not delivered/]) {
    await nurse.getByRole('button', { name: tab }).click()
    await nurse.waitForLoadState('networkidle')
    await accessibleInBothThemes(nurse)
  }
  await nurse.getByLabel('What needs a person').getByRole('button', { name: 'Send again' }).first().click()
  await expect.poll(() => product.fakes.store.texts.some(text => text.to === who.phone && text.body === 'Please ring us.'), { timeout: 10_000 }).toBe(true)

  await nurse.setViewportSize({ width: 390, height: 844 })
  await accessibleInBothThemes(nurse)
  for (const width of [390, 1440]) {
    await nurse.setViewportSize({ width, height: 900 })
    await nurse.goto(`${product.url}/demo`, { waitUntil: 'load' })
    await nurse.getByRole('heading', { name: 'Make it go wrong' }).waitFor()
    await accessibleInBothThemes(nurse)
  }
  const before = await nurse.locator('h1').innerText()
  await nurse.getByRole('button', { name: 'On 1 hour' }).click()
  await expect.poll(() => nurse.locator('h1').innerText(), { timeout: 10_000 }).not.toBe(before)
  expect(faults).toEqual([])
})
