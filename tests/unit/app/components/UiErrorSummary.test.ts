// @vitest-environment happy-dom
import { mount } from '@vue/test-utils'
import { afterEach, describe, expect, it } from 'vitest'
import { nextTick } from 'vue'
import UiErrorSummary from '../../../../app/components/ui/UiErrorSummary.vue'

function summary(problems: { field?: string, message: string }[]) {
  return mount(UiErrorSummary, { attachTo: document.body, props: { problems }, global: { stubs: { Icon: true } } })
}
const iop = { field: 'iop', message: 'Pressure is usually 4 to 60: check 340' }
afterEach(() => { document.body.innerHTML = '' })

describe('the error summary', () => {
  it('is not there without a problem', () => {
    expect(summary([]).find('[role=alert]').exists()).toBe(false)
  })

  it('takes the focus when a problem appears', async () => {
    const wrapper = summary([])
    await wrapper.setProps({ problems: [iop] })
    await nextTick()
    expect(document.activeElement).toBe(wrapper.get('[role=alert]').element)
  })

  it('leads to the field, and into a group of choices', async () => {
    const form = document.createElement('form')
    form.innerHTML = '<input id="iop"><div id="flare"><input type="radio" name="flare" value="0"></div>'
    document.body.append(form)
    const wrapper = summary([iop, { field: 'flare', message: 'Flare: choose a grade' }])
    await nextTick()
    await wrapper.findAll('a')[0]!.trigger('click')
    expect(document.activeElement).toBe(document.getElementById('iop'))
    await wrapper.findAll('a')[1]!.trigger('click')
    expect(document.activeElement).toBe(document.querySelector('#flare input'))
  })

  it('writes a line without a field as plain words', () => {
    const wrapper = summary([{ message: 'The list has changed.' }])
    expect(wrapper.find('a').exists()).toBe(false)
    expect(wrapper.text()).toContain('The list has changed.')
  })
})
