// A dependency of the linter calls Object.groupBy, which Node.js 20 does not have yet.
Object.groupBy ??= (items, keyOf) => {
  const groups = Object.create(null)
  let index = 0
  for (const item of items) (groups[keyOf(item, index++)] ??= []).push(item)
  return groups
}
