vim.filetype.add({ extension = { lyate = 'lyate' } })
