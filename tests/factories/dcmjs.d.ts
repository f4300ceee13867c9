declare module 'dcmjs' {
  interface WrittenDict { dict: unknown, write(): ArrayBuffer }
  const dcmjs: { data: { DicomMetaDictionary: { denaturalizeDataset(dataset: unknown): unknown }, DicomDict: new (meta: unknown) => WrittenDict } }
  export default dcmjs
}
