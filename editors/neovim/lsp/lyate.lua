-- Read by vim.lsp.enable('lyate') in Neovim 0.11 and later.
return {
  cmd = { 'lyate', 'serve' },
  filetypes = { 'lyate' },
  root_markers = { 'lyate.toml', '.git' },
}
