vim.bo.commentstring = '# %s'
vim.bo.expandtab = true
vim.bo.shiftwidth = 4
vim.bo.iskeyword = '@,48-57,_,+,-,^'
