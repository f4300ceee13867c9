import { getNoteDefaults } from '#server/services/theatre/get-note-defaults'
import { defineStaffApi, idParams } from '#server/utils/api'

export default defineStaffApi({ params: idParams }, async ({ ctx, params }) => {
  const { last, medians } = await getNoteDefaults(ctx, params.id)
  return {
    last: last ? { anaesthesia: last.anaesthesia, incision: last.incision, technique: last.technique, viscoelastics: last.viscoelastics } : null,
    medians: { cases: medians.cases, energyPercentSeconds: medians.energyPercentSeconds, ultrasoundSeconds: medians.ultrasoundSeconds },
  }
})
