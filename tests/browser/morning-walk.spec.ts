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

test('a nurse marks arrived, an optometrist signs cells 3+ with pain, the surgeon’s open page shows it within two seconds and closes it', async () => {
  const surgeon = await openAs('tobias.quillfeather')
  await surgeon.goto(`${product.url}/escalations`, { waitUntil: 'load' })
  await surgeon.getByText('wait for an answer').waitFor()
  await surgeon.waitForTimeout(1_000)

  const nurse = await openAs('maren.oxlade')
  await nurse.getByRole('heading', { name: 'Day-one checks' }).waitFor()
  await nurse.getByRole('button', { name: 'Mark arrived' }).first().click()
  await nurse.getByRole('button', { name: 'Send in' }).first().waitFor()

  const optometrist = await openAs('ivo.hartnell')
  await optometrist.getByRole('link', { name: 'Theodora Quist' }).first().click()
  await optometrist.getByRole('heading', { name: 'Vision' }).waitFor()
  await optometrist.waitForTimeout(500)
  await optometrist.getByRole('button', { name: '6/9' }).first().click()
  await optometrist.getByRole('group', { name: 'Pain, 0 to 10' }).or(optometrist.getByRole('radiogroup', { name: 'Pain, 0 to 10' })).locator('input').nth(4).check({ force: true })
  await optometrist.fill('#iopMmHg', '16')
  await optometrist.locator('#iopMmHg').blur()
  const choose = (name: string, index: number) => optometrist.locator(`#${name}`).locator('input').nth(index).check({ force: true })
  await choose('oedemaGrade', 1)
  await choose('cells', 4)
  await choose('flare', 1)
  await choose('wound', 0)
  await choose('chamberDepth', 0)
  await choose('lensPosition', 0)
  const sign = optometrist.getByRole('button', { name: 'Sign and raise Now' })
  await sign.waitFor()
  await expectAccessible(optometrist)
  await sign.click()
  await surgeon.getByRole('link', { name: 'Theodora Quist' }).waitFor({ timeout: 4_000 })
  await optometrist.getByText('is raised', { exact: false }).waitFor()
  await expect.poll(() => product.fakes.store.texts.some(text => text.to === '+447700900103'), { timeout: 10_000 }).toBe(true)

  await surgeon.getByRole('button', { name: 'I am ringing now' }).click()
  await surgeon.getByRole('button', { name: 'Open Theodora Quist, right eye' }).or(surgeon.getByRole('button', { name: 'Open Theodora Quist, left eye' })).click()
  await surgeon.getByText('has it: I am ringing now').waitFor()
  await surgeon.getByLabel('What was done').fill('Seen at once, treated, recheck tomorrow.')
  await surgeon.getByRole('button', { name: 'Close with this' }).click()
  await surgeon.getByRole('link', { name: 'Theodora Quist' }).waitFor({ state: 'detached' })

  const { rows } = await product.pool.query('select p.id, p.patient_id from pathways p join patients t on t.id = p.patient_id where t.name = \'Theodora Quist\'')
  await nurse.goto(`${product.url}/patient/${rows[0].patient_id}`, { waitUntil: 'networkidle' })
  await expectAccessible(nurse)
  await nurse.getByRole('link', { name: 'Book the next visit' }).first().click()
  await nurse.waitForURL(/kind=follow-up/)
  await nurse.getByRole('button', { name: /^Book \d\d:\d\d/ }).last().click()
  await nurse.getByText(/^Booked: /).waitFor()
  const { rows: booked } = await product.pool.query('select 1 from visits where pathway_id = $1 and kind = \'first-week\' and state = \'booked\'', [rows[0].id])
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
