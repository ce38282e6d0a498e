vim.filetype.add({ extension = { bayes = 'bayes' } })
