-- Starts the server for .lyate files and shows its hints and findings as one types.
-- `vim.g.lyate_setup = false` before loading leaves all of this to your own configuration.
if vim.g.lyate_setup == false or vim.g.loaded_lyate then
  return
end
vim.g.loaded_lyate = true

vim.lsp.enable('lyate')

vim.api.nvim_create_autocmd('LspAttach', {
  group = vim.api.nvim_create_augroup('lyate', {}),
  callback = function(event)
    local client = vim.lsp.get_client_by_id(event.data.client_id)
    if client == nil or client.name ~= 'lyate' then
      return
    end
    vim.lsp.inlay_hint.enable(true, { bufnr = event.buf })
    -- Findings follow each keystroke, not only the end of typing.
    for _, pulled in ipairs({ false, true }) do
      local namespace = vim.lsp.diagnostic.get_namespace(client.id, pulled)
      vim.diagnostic.config({ update_in_insert = true, virtual_text = true }, namespace)
    end
  end,
})
