import sharp from 'sharp'

/** 40 million points: more than any camera in a clinic, less than what would fill the memory of the machine. */
const maxPoints = 40_000_000

/**
 * The picture drawn anew: only its points stay, turned upright; no metadata, no comments, nothing appended. Throws when it is no picture,
 * or one that unfolds to more than the limit.
 */
export async function redraw(bytes: Uint8Array, type: 'image/jpeg' | 'image/png'): Promise<Buffer> {
  const picture = sharp(bytes, { limitInputPixels: maxPoints, failOn: 'warning', pages: 1, sequentialRead: true }).rotate()
  return type === 'image/png' ? picture.png({ compressionLevel: 6 }).toBuffer() : picture.jpeg({ quality: 88 }).toBuffer()
}
