import { AxeBuilder } from '@axe-core/playwright'
import { chromium } from 'playwright-core'
import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { csvHeader, csvLineOf } from '#tests/factories/referral'
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

async function openAs(who: string): Promise<Page> {
  const context = await browser.newContext({ viewport: { width: 1440, height: 1000 }, timezoneId: 'Europe/London', locale: 'en-GB' })
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

test('a coordinator looks at a file, sees the fate of every line and takes over the good ones', async () => {
  const page = await openAs('corin.vellacott')
  await page.goto(`${product.url}/triage/import`, { waitUntil: 'networkidle' })
  await page.getByRole('button', { name: 'Look at the file' }).click()
  await page.getByRole('alert').getByText('Choose a file.').waitFor()
  const text = [csvHeader, csvLineOf(1), csvLineOf(2), csvLineOf(3, { eye: 'middle' })].join('\n')
  await page.getByLabel('Site', { exact: true }).selectOption({ label: 'Ferncombe Eye Unit' })
  await page.setInputFiles('#import-file', { name: 'referrals.csv', mimeType: 'text/csv', buffer: Buffer.from(text) })
  await page.getByRole('button', { name: 'Look at the file' }).click()
  await page.getByText('"middle" is not an eye. Write right, left or both.').waitFor()
  await expectAccessible(page)
  await page.getByRole('button', { name: 'Take over two lines' }).click()
  await page.getByText('from 2 lines. Left behind: 1.').waitFor()
  const { rows } = await product.pool.query('select count(*)::int n from referrals where source = \'csv\'')
  expect(rows[0].n).toBe(2)
})

test('a surgeon answers the warning signs, accepts the longest wait, and the queue goes on with the next', async () => {
  const page = await openAs('tobias.quillfeather')
  await page.getByRole('link', { name: 'Referrals' }).click()
  await page.getByRole('heading', { level: 1 }).getByText('referrals wait').waitFor()
  await page.waitForLoadState('networkidle')
  const first = await page.getByRole('heading', { level: 2 }).first().innerText()
  await expectAccessible(page)
  await page.getByRole('button', { name: 'Save the decision' }).click()
  await page.getByRole('alert').getByText('Choose a decision.').waitFor()
  await page.getByRole('radio', { name: 'Accept for biometry' }).check({ force: true })
  await page.getByRole('button', { name: 'Accept', exact: true }).click()
  await page.getByText('Accepted:').waitFor()
  await expect.poll(() => page.getByRole('heading', { level: 2 }).first().innerText()).not.toBe(first)
  const { rows } = await product.pool.query('select count(*)::int n from referrals where triage_decision = \'accepted\' and triaged_at > now() - interval \'5 minutes\'')
  expect(rows[0].n).toBe(1)
})

test('nothing left the machine and no page failed', () => expect(faults).toEqual([]))
