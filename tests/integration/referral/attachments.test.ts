import sharp from 'sharp'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { startProduct, signedIn } from '#tests/support/product'
import type { Product } from '#tests/support/product'
import { fileSender } from '#tests/support/send-file'

let product: Product
let pathwayId: string
beforeAll(async () => {
  product = await startProduct()
  pathwayId = (await product.pool.query('select w.id from pathways w join sites s on s.id = w.site_id where s.code = \'ferncombe\' and w.stage = \'referral\' and w.practice_id is null limit 1')).rows[0].id as string
})
afterAll(() => product?.stop())

const pdf = (inner = '') => Buffer.from(`%PDF-1.4\n1 0 obj<</Type/Catalog/Pages 2 0 R${inner}>>endobj\n2 0 obj<</Type/Pages/Kids[]/Count 0>>endobj\ntrailer<</Root 1 0 R>>\n%%EOF\n`)
const picture = (format: 'jpeg' | 'png', change: { width?: number } = {}) => sharp({ create: { width: change.width ?? 60, height: 40, channels: 3, background: '#8fa4cc' } }).toFormat(format)
const add = async (body: Uint8Array, name: string, who = 'corin.vellacott', id = pathwayId) => (await fileSender(product, who))(`/api/referral/${id}/attachments`, { body, type: 'application/octet-stream', name })
const form = async (body: Uint8Array, name: string) => {
  const data = new FormData()
  data.append('file', new File([new Uint8Array(body)], name))
  return (await fileSender(product, 'corin.vellacott'))(`/api/referral/${pathwayId}/attachments`, { body: data })
}
const kept = async () => (await product.pool.query('select count(*)::int n from attachments where pathway_id = $1', [pathwayId])).rows[0].n as number

test('a PDF goes in by form and comes out as it was: to be saved, in a sandbox, and never as a page', async () => {
  const added = await form(pdf(), 'Letter from Harbour Lane.pdf')
  expect(added.status).toBe(200)
  const opened = await (await fileSender(product, 'tobias.quillfeather'))(`/files/${added.body.id}`)
  expect(opened.status).toBe(200)
  expect(opened.bytes.equals(pdf())).toBe(true)
  expect(opened.headers.get('content-type')).toBe('application/pdf')
  expect(opened.headers.get('content-disposition')).toBe('attachment; filename="file.pdf"; filename*=UTF-8\'\'Letter%20from%20Harbour%20Lane.pdf')
  expect(opened.headers.get('x-content-type-options')).toBe('nosniff')
  expect(opened.headers.get('content-security-policy')).toBe('default-src \'none\'; sandbox')
  expect(opened.headers.get('cache-control')).toContain('no-store')
  const { rows } = await product.pool.query('select person_id from audit_rows where event = \'referral.attachment-opened\' and subject_id = $1', [added.body.id])
  expect(rows).toHaveLength(1)
})

test('a picture is drawn anew: what its camera wrote into it and what hangs behind it are gone', async () => {
  const camera = Buffer.concat([await picture('jpeg').withExif({ IFD0: { Copyright: 'A-SECRET-PLACE' } }).toBuffer(), Buffer.from('PK\u0003\u0004 <script>alert(1)</script>')])
  expect(camera.includes('A-SECRET-PLACE')).toBe(true)
  const added = await add(camera, 'photo.JPG')
  expect(added.status).toBe(200)
  const opened = await (await fileSender(product, 'maren.oxlade'))(`/files/${added.body.id}`)
  expect(opened.headers.get('content-type')).toBe('image/jpeg')
  expect(opened.bytes.includes('A-SECRET-PLACE')).toBe(false)
  expect(opened.bytes.includes('script')).toBe(false)
  expect((await sharp(opened.bytes).metadata())).toMatchObject({ format: 'jpeg', width: 60, height: 40 })
  expect((await add(await picture('png').toBuffer(), 'scan.png')).status).toBe(200)
})

test('the name that is shown holds no path and nothing that breaks a header; the stored name holds nothing of it', async () => {
  const added = await add(pdf('/Lang(en)'), '..\\..\\/etc/"pass"\r\nwd; x=<b>.pdf')
  expect(added.status).toBe(200)
  expect(added.body.name).toBe('passwd x=b.pdf')
  const { rows } = await product.pool.query('select stored_as from attachments where id = $1', [added.body.id])
  expect(rows[0].stored_as).toMatch(/^[0-9a-f]{2}\/[0-9a-f-]{36}$/)
})

const svg = '<svg xmlns="http://www.w3.org/2000/svg"><script>alert(1)</script></svg>'
const bomb = () => sharp({ create: { width: 12_000, height: 12_000, channels: 3, background: '#000' }, limitInputPixels: false }).png({ compressionLevel: 9 }).toBuffer()
test.each<[string, () => Uint8Array | Promise<Uint8Array>, string, number]>([
  ['a drawing with a script', () => Buffer.from(svg), 'eye.svg', 415], ['the same called a PNG', () => Buffer.from(svg), 'eye.png', 415],
  ['a page called a PDF', () => Buffer.from('<!doctype html><script>alert(1)</script>'), 'letter.pdf', 415],
  ['a PNG called a PDF', () => picture('png').toBuffer(), 'letter.pdf', 415], ['a PDF called a JPEG', () => pdf(), 'photo.jpg', 415], ['a PDF without an ending', () => pdf(), 'letter', 415], ['a PDF called a page', () => pdf(), 'letter.pdf.html', 415],
  ['a zip', () => Buffer.from('PK\u0003\u0004aaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaa'), 'letter.pdf', 415],
  ['a PDF with a zip behind it', () => Buffer.concat([pdf(), Buffer.from('PK\u0003\u0004....PK\u0005\u0006')]), 'letter.pdf', 422],
  ['a PDF with a zip inside its end', () => Buffer.from(pdf().toString('latin1').replace('%%EOF', 'PK\u0005\u0006\n%%EOF'), 'latin1'), 'letter.pdf', 422],
  ['a PDF that is a page as well', () => Buffer.from(pdf().toString().replace('%PDF-1.4\n', '%PDF-1.4\n<html><script>alert(1)</script></html>\n')), 'letter.pdf', 422],
  ['a PDF with a script', () => pdf('/OpenAction<</S/JavaScript/JS(app.alert(1))>>'), 'letter.pdf', 422], ['a PDF that starts a program', () => pdf('/OpenAction<</S/Launch/F(x.exe)>>'), 'letter.pdf', 422], ['a PDF that carries a file', () => pdf('/Names<</EmbeddedFiles 3 0 R>>'), 'letter.pdf', 422],
  ['a PDF cut short', () => pdf().subarray(0, 60), 'letter.pdf', 422], ['a picture cut short', async () => (await picture('png', { width: 900 }).toBuffer()).subarray(0, 200), 'scan.png', 422],
  ['a picture that unfolds to 144 million points', bomb, 'scan.png', 422],
  ['an animated GIF', () => Buffer.from('GIF89a\u0001\u0000\u0001\u0000\u0000\u0000\u0000;'), 'scan.png', 415], ['nothing', () => Buffer.alloc(0), 'letter.pdf', 422], ['more than 20 MB', () => Buffer.concat([pdf(), Buffer.alloc(20_500_000, 32)]), 'letter.pdf', 413],
])('%s is refused and not kept', async (_name, make, name, status) => {
  const before = await kept()
  const answer = await add(await make(), name)
  expect(answer.status).toBe(status)
  expect(answer.headers.get('content-type')).toContain('application/problem+json')
  expect(await kept()).toBe(before)
})

test('the same file twice is refused; a form with two files is refused', async () => {
  await add(pdf('/Lang(cy)'), 'once.pdf')
  expect((await add(pdf('/Lang(cy)'), 'twice.pdf')).status).toBe(409)
  const data = new FormData()
  data.append('file', new File([new Uint8Array(pdf())], 'a.pdf'))
  data.append('more', new File([new Uint8Array(pdf())], 'b.pdf'))
  expect((await (await fileSender(product, 'corin.vellacott'))(`/api/referral/${pathwayId}/attachments`, { body: data })).status).toBe(422)
})

test('only who may see the pathway lists, opens or adds; nobody who is not signed in', async () => {
  const added = await add(pdf('/Lang(pl)'), 'private.pdf')
  expect((await fetch(`${product.url}/files/${added.body.id}`)).status).toBe(401)
  for (const who of ['sorrel.wincanton', 'petra.lanyon', 'bryony.askerswell']) {
    const caller = await fileSender(product, who)
    expect((await caller(`/files/${added.body.id}`)).status, who).toBe(404)
    expect((await caller(`/api/referral/${pathwayId}/attachments`)).status, who).toBe(404)
    expect((await add(pdf('/Lang(ur)'), 'x.pdf', who)).status, who).toBe(404)
  }
  const nurse = await signedIn(product, 'maren.oxlade')
  const list = await nurse<{ files: { name: string, storedAs?: string, sha256?: string }[] }>(`/api/referral/${pathwayId}/attachments`)
  expect(list.body.files.map(each => each.name)).toContain('private.pdf')
  expect(list.body.files.every(each => each.storedAs === undefined && each.sha256 === undefined)).toBe(true)
})
