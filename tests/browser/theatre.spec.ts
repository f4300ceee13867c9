import { AxeBuilder } from '@axe-core/playwright'
import { chromium } from 'playwright-core'
import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { signedIn, startProduct } from '#tests/support/product'
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

/** A window of one person's own, signed in. A request that leaves the machine and an error of the page are faults of the product. */
async function openAs(who: string, width = 1440): Promise<Page> {
  const context = await browser.newContext({ viewport: { width, height: 1000 }, timezoneId: 'Europe/London', locale: 'en-GB' })
  const signedIn = await context.request.post(`${product.url}/api/people/sign-in`, { headers: { 'x-dawnward-csrf': '1' }, data: { email: `${who}@example.org`, password: 'dawn-over-ferncombe' } })
  expect(signedIn.ok()).toBe(true)
  const page = await context.newPage()
  page.on('request', (request) => {
    if (!request.url().startsWith(product.url) && !/^(data|blob):/.test(request.url())) faults.push(`left the machine: ${request.url()}`)
  })
  page.on('pageerror', error => faults.push(`${page.url()}: ${error.message}`))
  return page
}

async function expectAccessible(page: Page): Promise<void> {
  for (const theme of ['light', 'dim']) {
    await page.evaluate((name) => {
      document.documentElement.dataset.theme = name
    }, theme)
    const { violations } = await new AxeBuilder({ page }).withTags(['wcag2a', 'wcag2aa', 'wcag21aa', 'wcag22aa']).analyze()
    expect(violations.map(each => `${page.url()} ${theme} ${each.id}: ${each.nodes[0]?.html.slice(0, 160)}`)).toEqual([])
  }
}

/** A list nine days ahead, 09:00 to 11:10 UTC, with three waiting eyes; the first has an interpreter who comes at ten. */
async function makeList() {
  const coordinator = await signedIn(product, 'corin.vellacott')
  const siteId = (await product.pool.query('select id from sites where code = \'ferncombe\'')).rows[0].id as string
  const surgeonId = (await product.pool.query('select id from people where name = \'Tobias Quillfeather\'')).rows[0].id as string
  const date = new Date(Date.now() + 9 * 86_400_000).toISOString().slice(0, 10)
  const list = await coordinator<{ id: string }>('/api/theatre', { body: { siteId, surgeonId, room: 'Theatre 7', startsAt: `${date}T09:00:00.000Z`, endsAt: `${date}T11:10:00.000Z` } })
  const day = await coordinator<{ waiting: { id: string }[] }>(`/api/theatre?siteId=${siteId}&date=${date}`)
  for (const { id } of day.body.waiting.slice(0, 3)) await coordinator(`/api/theatre/list/${list.body.id}/case`, { body: { pathwayId: id } })
  const filled = await coordinator<{ site: { zone: string }, lists: { id: string, rowVersion: number, startsAt: string, cases: { id: string, plannedMinutes: number, patient: { name: string } }[] }[] }>(`/api/theatre?siteId=${siteId}&date=${date}`)
  const found = filled.body.lists.find(each => each.id === list.body.id)!
  const hour = (minutes: number) => new Date(Date.parse(found.startsAt) + minutes * 60_000).toLocaleTimeString('en-GB', { timeZone: filled.body.site.zone, hour: '2-digit', minute: '2-digit' })
  await coordinator(`/api/theatre/case/${found.cases[0]!.id}`, { method: 'PUT', body: { rowVersion: found.rowVersion, plannedMinutes: found.cases[0]!.plannedMinutes, constraints: { interpreterFrom: hour(60) } } })
  return { path: `/theatre?site=${siteId}&date=${date}`, id: found.id, names: found.cases.map(each => each.patient.name) }
}

const chanceIn = (text: string | null) => Number(/over on (\d+) of 100/.exec(text ?? '')?.[1])

test('a coordinator reorders by keyboard, sees the finish and the chance of overrun change at once, and saves; the surgeon locks the list', async () => {
  const { path, id, names } = await makeList()
  const page = await openAs('corin.vellacott')
  await page.goto(`${product.url}${path}`, { waitUntil: 'networkidle' })
  await page.getByText('before the interpreter comes').waitFor()
  await expectAccessible(page)
  const down = page.getByRole('button', { name: `Move ${names[0]} down` })
  await down.focus()
  // From the key to the new words, in the page's own clock: five moves, and the quickest counts, since other work shares the machine and only slows it.
  const times: number[] = []
  for (const way of ['down', 'up', 'down', 'up', 'down']) {
    if (way === 'up') await page.getByRole('button', { name: `Move ${names[0]} up` }).focus()
    else await down.focus()
    // The page listens before the key is pressed, and keeps the answer until it is asked for.
    await page.evaluate(() => {
      Object.assign(window, { answered: new Promise<number>((resolve) => {
        let from = 0
        window.addEventListener('keydown', () => {
          from = performance.now()
        }, { once: true, capture: true })
        const seen = new MutationObserver(() => {
          seen.disconnect()
          resolve(performance.now() - from)
        })
        seen.observe(document.querySelector('[data-said]')!, { childList: true, characterData: true, subtree: true })
      }) })
    })
    await page.keyboard.press('Enter')
    const took = await page.evaluate(() => (window as unknown as { answered: Promise<number> }).answered)
    times.push(took)
  }
  console.info(`reordering answered in ${times.map(took => took.toFixed(0)).join(', ')} ms`)
  expect(Math.min(...times)).toBeLessThan(100)
  expect(await page.evaluate(() => document.activeElement?.getAttribute('aria-label'))).toBe(`Move ${names[0]} down`)
  await page.keyboard.press('Enter')
  await page.getByText(`${names[0]} moved to place 3 of 3`).waitFor()
  const panel = page.locator('[data-trying]')
  const words = await panel.textContent()
  const [tried, saved] = words!.split('As saved')
  expect(chanceIn(tried!)).toBeLessThan(chanceIn(saved!))
  await page.getByRole('button', { name: 'Save this order' }).click()
  await page.getByText('Order saved').waitFor()
  const { rows } = await product.pool.query('select t.name from theatre_cases c join pathways p on p.id = c.pathway_id join patients t on t.id = p.patient_id where c.list_id = $1 order by c.position', [id])
  expect(rows.map(row => row.name)).toEqual([names[1], names[2], names[0]])

  // Somebody else orders the list meanwhile: both orders are shown, and nothing is lost.
  await page.getByRole('button', { name: `Move ${names[1]} down` }).click()
  const other = await signedIn(product, 'leopold.strake')
  const { rows: now } = await product.pool.query('select c.id, l.row_version from theatre_cases c join theatre_lists l on l.id = c.list_id where l.id = $1 order by c.position desc', [id])
  expect((await other(`/api/theatre/list/${id}/order`, { method: 'PUT', body: { rowVersion: now[0].row_version, order: now.map(row => row.id), reason: 'The interpreter rang' } })).status).toBe(200)
  await page.getByRole('button', { name: 'Save this order' }).click()
  await page.getByRole('heading', { name: 'Two orders of this list' }).waitFor()
  await expectAccessible(page)
  await page.getByRole('button', { name: 'Take the order in the record' }).click()

  const surgeon = await openAs('tobias.quillfeather', 390)
  await surgeon.goto(`${product.url}${path}`, { waitUntil: 'networkidle' })
  await surgeon.getByRole('button', { name: 'Lock this list' }).click()
  await surgeon.getByText('Locked by Tobias Quillfeather').waitFor()
  await expectAccessible(surgeon)
  await page.reload({ waitUntil: 'networkidle' })
  await page.getByRole('button', { name: `Take ${names[2]} off` }).click()
  await page.getByRole('dialog').getByRole('button', { name: 'Take off' }).click()
  await page.getByRole('alert').waitFor()
  await page.getByLabel('Why', { exact: true }).fill('Has a cold')
  await page.getByRole('dialog').getByRole('button', { name: 'Take off' }).click()
  await page.getByText(`${names[2]} taken off`).waitFor()
  await page.getByRole('link', { name: 'Print' }).click()
  await page.waitForURL(/\/theatre\/print\//)
  await page.getByText('Changes since the lock').waitFor()
  await expectAccessible(page)
  expect(faults).toEqual([])
})

test('the wrong lens stops the safety check until a surgeon explains it, on a desk and on a telephone', async () => {
  const { rows } = await product.pool.query('select c.id, t.name from theatre_cases c join pathways p on p.id = c.pathway_id join patients t on t.id = p.patient_id where c.state = \'planned\' and p.stage = \'surgery\' order by c.position limit 1')
  const gtin = (await product.pool.query('select gtin from lens_labels where power_d = 22.5')).rows[0].gtin as string
  const path = `/theatre/case/${rows[0].id}`
  const nurse = await openAs('maren.oxlade')
  await nurse.goto(`${product.url}/theatre`, { waitUntil: 'networkidle' })
  await nurse.getByRole('link', { name: `Safety check of ${rows[0].name}` }).click()
  await nurse.getByRole('heading', { name: 'Ask the patient.' }).waitFor()
  await expectAccessible(nurse)
  const answer = async (group: string, choice: string) => nurse.getByRole('radiogroup', { name: group }).getByLabel(choice, { exact: true }).check({ force: true })
  for (const group of ['“What is your name?”', '“When were you born?”', '“Which eye are we doing?”', 'The signed consent, for this eye']) await answer(group, 'Agrees')
  await nurse.getByText('Two answers are open: the mark on the skin, allergies.').waitFor()
  await answer('The surgeon’s mark on the skin', 'Seen')
  await answer('“Are you allergic to anything?”', 'As recorded')
  await nurse.getByRole('button', { name: 'Sign: before anaesthesia' }).click()
  await nurse.getByRole('heading', { name: 'Everybody stops.' }).waitFor()

  // A scanner is a keyboard: it types the label, FNC1 as Ctrl and ], and Enter.
  await nurse.getByLabel('Lens label').focus()
  await nurse.keyboard.type(`]d201${gtin}1729123110LOT7`)
  await nurse.keyboard.press('Control+]')
  await nurse.keyboard.type('21SN9')
  await nurse.keyboard.press('Enter')
  await nurse.getByRole('heading', { name: 'Stop. This is not the lens planned.' }).waitFor()
  await expectAccessible(nurse)
  expect(await nurse.getByRole('button', { name: /^Sign/ }).count()).toBe(0)
  const { rows: scans } = await product.pool.query('select lot, serial, power_d from lens_scans where case_id = $1', [rows[0].id])
  expect(scans).toEqual([{ lot: 'LOT7', serial: 'SN9', power_d: 22.5 }])

  const surgeon = await openAs('tobias.quillfeather', 390)
  await surgeon.goto(`${product.url}${path}`, { waitUntil: 'networkidle' })
  await surgeon.getByRole('heading', { name: 'Stop. This is not the lens planned.' }).waitFor()
  await expectAccessible(surgeon)
  await surgeon.getByRole('button', { name: 'Sign and go on' }).click()
  await surgeon.getByText('Say why the case goes on all the same.').first().waitFor()
  await surgeon.getByLabel('Why the case goes on all the same').fill('The planned power fell on the floor; the patient was told.')
  await surgeon.getByRole('button', { name: 'Sign and go on' }).click()
  await surgeon.getByText('Explained stops').waitFor()
  await expectAccessible(surgeon)

  await nurse.reload({ waitUntil: 'networkidle' })
  await answer('Everybody has said their name and part', 'Yes')
  await answer('Name, operation and eye said aloud once more', 'All agree')
  await answer('Antiseptic on skin and eye, or what the allergy asks for', 'Done')
  await answer('What may be hard, and what it needs, is in the room', 'In the room')
  await nurse.getByRole('button', { name: 'Sign: before incision' }).click()
  await nurse.getByRole('heading', { name: 'Before anybody leaves.' }).waitFor()
  expect(faults).toEqual([])
})
