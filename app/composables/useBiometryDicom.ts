import { useMutation } from '@tanstack/vue-query'
import type { MaybeRefOrGetter } from 'vue'
import type { EyeMeasures } from '#shared/contracts/biometry'
import type { Eye } from '#shared/domain/pathway/vocabulary'

export interface DicomProposal { eye: Eye, kind: 'axial' | 'keratometry', measuredOn: string | null, values: Partial<EyeMeasures>, notes: string[], fellow: { values: Partial<EyeMeasures>, notes: string[] } | null }

/** Sends a device's file and answers what it proposes for this eye. Nothing is saved by it. */
export function useBiometryDicom(pathwayId: MaybeRefOrGetter<string>) {
  const api = useApi()
  return useMutation({ mutationFn: (file: File) => {
    const form = new FormData()
    form.append('file', file)
    return api<DicomProposal>(`/api/biometry/${toValue(pathwayId)}/dicom`, { method: 'POST', body: form })
  } })
}
