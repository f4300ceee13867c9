import { AxeBuilder } from '@axe-core/playwright'
import { chromium } from 'playwright-core'
import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { startProduct } from '#tests/support/product'
import type { Product } from '#tests/support/product'

let product: Product
let browser: Browser
let page: Page
const faults: string[] = []

beforeAll(async () => {
  product = await startProduct()
  browser = await chromium.launch({ executablePath: '/usr/bin/chromium', args: ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'] })
  page = await (await browser.newContext({ viewport: { width: 1440, height: 1000 }, timezoneId: 'Europe/London', locale: 'en-GB' })).newPage()
  page.on('pageerror', error => faults.push(`${page.url()}: ${error.message}`))
  await page.goto(`${product.url}/sign-in`, { waitUntil: 'networkidle' })
  await page.fill('#email', 'corin.vellacott@example.org')
  await page.fill('#password', 'dawn-over-ferncombe')
  await page.getByRole('button', { name: 'Sign in' }).click()
  await page.waitForURL(`${product.url}/`)
})
afterAll(async () => {
  await browser?.close()
  await product?.stop()
})

async function expectAccessible(): Promise<void> {
  for (const theme of ['light', 'dim']) {
    await page.evaluate(name => document.documentElement.setAttribute('data-theme', name), theme)
    for (const width of [1440, 390]) {
      await page.setViewportSize({ width, height: 1000 })
      const { violations } = await new AxeBuilder({ page }).withTags(['wcag2a', 'wcag2aa', 'wcag21aa', 'wcag22aa']).analyze()
      expect(violations.map(each => `${page.url()} ${theme} ${width} ${each.id}: ${each.nodes[0]?.html.slice(0, 200)}`)).toEqual([])
      expect(await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth), `${page.url()} ${theme} ${width}`).toBeLessThanOrEqual(0)
    }
  }
  await page.evaluate(() => document.documentElement.removeAttribute('data-theme'))
  await page.setViewportSize({ width: 1440, height: 1000 })
}

async function fillNew(name: string): Promise<void> {
  await page.getByLabel('Full name').fill(name)
  await page.getByLabel('Day', { exact: true }).fill('3')
  await page.getByLabel('Month', { exact: true }).fill('4')
  await page.getByLabel('Year', { exact: true }).fill('1948')
  await page.getByLabel('Left eye', { exact: true }).check()
  await page.getByLabel('Site', { exact: true }).selectOption({ label: 'Ferncombe Eye Unit' })
  await page.getByLabel('Referrer', { exact: true }).fill('Harbour Lane Opticians')
  await page.getByLabel('Why the patient is referred').fill('Glare at night.')
}

test('a referral without its facts is refused beside its fields; complete, it opens the pathway of the named eye', async () => {
  await page.goto(`${product.url}/pathways`, { waitUntil: 'networkidle' })
  await page.getByRole('link', { name: 'Add a referral' }).click()
  await page.getByRole('button', { name: 'Add the referral' }).click()
  await page.getByRole('link', { name: 'Enter the full name.' }).waitFor()
  await page.getByRole('link', { name: 'Choose the eye.' }).waitFor()
  await expectAccessible()
  await fillNew('Isolde Garrowby')
  await page.getByRole('button', { name: 'Add the referral' }).click()
  await page.waitForURL(/\/pathways\/[0-9a-f]{8}-/)
  await page.getByRole('heading', { name: 'Referral', exact: true }).waitFor()
  const { rows } = await product.pool.query('select p.eye from pathways p join patients t on t.id = p.patient_id where t.name = \'Isolde Garrowby\'')
  expect(rows).toEqual([{ eye: 'left' }])
  await expectAccessible()
})

test('the same person again is shown before anything is made, and "another person" makes the second', async () => {
  const count = async () => (await product.pool.query('select count(*)::int as n from patients where name = \'Isolde Garrowby\'')).rows[0].n
  await page.goto(`${product.url}/pathways/new`, { waitUntil: 'networkidle' })
  await fillNew('Isolde Garrowby')
  await page.getByRole('button', { name: 'Add the referral' }).click()
  await page.getByRole('button', { name: /This is the same person/ }).waitFor()
  expect(await count()).toBe(1)
  await expectAccessible()
  await page.getByRole('button', { name: /This is the same person/ }).click()
  await page.getByText('This eye already has an open pathway.', { exact: false }).first().waitFor()
  expect(await page.getByLabel('Full name').inputValue()).toBe('Isolde Garrowby')
  await page.getByRole('button', { name: 'Add the referral' }).click()
  await page.getByRole('button', { name: 'Another person: add them' }).click()
  await page.waitForURL(/\/pathways\/[0-9a-f]{8}-/)
  expect(await count()).toBe(2)
})

test('a hold is put on and released with the keyboard alone', async () => {
  const state = async () => (await product.pool.query('select state from pathways where id = $1', [new URL(page.url()).pathname.split('/')[2]])).rows[0].state
  await page.getByRole('button', { name: 'Put on hold' }).focus()
  await page.keyboard.press('Enter')
  await page.getByLabel('Why it waits').waitFor()
  await page.keyboard.press('Tab')
  await page.keyboard.type('Waits for a scan')
  await page.keyboard.press('Tab')
  // Day and month alike: the browser's own order of the two does not matter. A hold lasts a year at most.
  await page.keyboard.type(`0101${new Date().getFullYear() + 1}`)
  await page.keyboard.press('Enter')
  await page.getByRole('button', { name: 'Release the hold' }).waitFor()
  expect(await state()).toBe('held')
  await page.getByRole('button', { name: 'Release the hold' }).press('Enter')
  await page.getByRole('button', { name: 'Put on hold' }).waitFor()
  expect(await state()).toBe('open')
})

test('the horizon is filtered, its filter kept under a name and taken up again, and a row opens in place', async () => {
  await page.goto(`${product.url}/pathways`, { waitUntil: 'networkidle' })
  await page.getByRole('button', { name: 'Escalated', exact: true }).click()
  await page.getByRole('button', { name: 'Save this filter' }).click()
  await page.getByLabel('Name of the filter').fill('Needs an answer')
  await page.getByRole('button', { name: 'Save it for me' }).click()
  await page.getByText('Saved for you.').waitFor()
  await page.reload({ waitUntil: 'networkidle' })
  await page.getByRole('group', { name: 'Saved filters' }).getByRole('button', { name: 'Needs an answer', exact: true }).click()
  expect(await page.getByRole('button', { name: 'Escalated', exact: true }).getAttribute('aria-pressed')).toBe('true')
  await page.locator('[data-thread]').first().click()
  await page.getByRole('link', { name: /^Open the pathway/ }).waitFor()
  await expectAccessible()
  await page.getByRole('link', { name: /^Patient/ }).first().click()
  await page.getByRole('heading', { name: 'What happened' }).waitFor()
  await page.getByRole('heading', { name: 'Contact' }).waitFor()
  await expectAccessible()
  expect(faults).toEqual([])
})
