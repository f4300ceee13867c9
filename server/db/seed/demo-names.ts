/** Invented people of the demo. Any likeness to anybody is chance. */
export const demoNames = [
  'Hesper Dunmallow', 'Augustin Fairlamb', 'Rosalind Eckersfold', 'Theodora Quist', 'Casimir Underhay', 'Benedek Farrow', 'Winifred Saltonby', 'Noor Castellane-Webb', 'Gethin Marlowe-Pugh', 'Idony Thackwell',
  'Fergus Abelthorpe', 'Delphine Oakhanger', 'Orla Pemberwick', 'Jonty Wetherfold', 'Perpetua Lindqvist-Moss', 'Caspian Thrupp', 'Isolde Marchbanks', 'Bertram Okonjo-Vale', 'Wilmot Strand', 'Ludo Brackenridge',
  'Mabel Ainsthorpe', 'Emrys Tolliver', 'Sunniva Grale', 'Ottoline Fennimore', 'Aldous Penhale', 'Brigid Harkwell', 'Cosmo Vantry', 'Dorothea Linfold', 'Evander Crisp', 'Fenella Rook', 'Gideon Ashlark', 'Hermione Tull',
  'Ignatius Bell-Moor', 'Jessamy Corran', 'Kester Whinfell', 'Lavinia Drey', 'Magnus Orchardleigh', 'Nerys Tamblyn', 'Osbert Finch-Hale', 'Philippa Grouse', 'Quentin Larkrise', 'Rhoda Semple', 'Silas Thornbury', 'Tamsin Udall',
  'Ursula Vayne', 'Vaughan Westlake', 'Wanda Yarrow', 'Xanthe Zeal', 'Yestin Abbot', 'Zillah Brome', 'Amias Culver', 'Beryl Dacre', 'Clement Estcourt', 'Daphne Furlong', 'Elias Goodrick',
  'Pomona Silverdale', 'Hartley Quince', 'Rufus Applegarth', 'Tamsin Overbury', 'Alasdair Wrenfield', 'Coralie Nettleship', 'Odile Farnaby', 'Silas Marrable',
]
