import type { ProblemBody } from './useApi'

/** One refused or running act of a form: what is said at the top, beside each field, and whether it waits. What was typed stays. */
export function useSubmit() {
  const busy = ref(false)
  const problem = ref<ProblemBody>()
  const done = ref('')
  const problems = computed(() => {
    if (!problem.value) return []
    const fields = problem.value.fields ?? []
    return fields.length ? fields.map(each => ({ field: each.field, message: each.message })) : [{ message: problem.value.status === 409 ? `${problem.value.title} What you typed is still here.` : problem.value.title }]
  })
  const errorOf = (field: string) => problem.value?.fields?.find(each => each.field === field)?.message

  /** Runs one act. Answers its result, or undefined when it was refused. */
  async function submit<T>(work: () => Promise<T>, words = ''): Promise<T | undefined> {
    if (busy.value) return undefined
    busy.value = true
    problem.value = undefined
    done.value = ''
    try {
      const result = await work()
      done.value = words
      return result
    }
    catch (error) {
      problem.value = error instanceof ApiProblem ? error.problem : { title: 'That did not work. What you typed is still here.', status: 0, code: 'page.failed', detail: '' }
      return undefined
    }
    finally {
      busy.value = false
    }
  }
  function clear() {
    problem.value = undefined
  }
  return { busy, problem, problems, errorOf, done, submit, clear }
}
export type Submit = ReturnType<typeof useSubmit>
