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
    -- Findings follow each keystroke, not only the end of typing. Beside a line stands the
    -- name of its rule, since the sentences are long; under the cursor's line, all of it.
    for _, pulled in ipairs({ false, true }) do
      vim.diagnostic.config({
        update_in_insert = true,
        virtual_text = { format = function(finding) return finding.code end },
        virtual_lines = {
          current_line = true,
          format = function(finding) return finding.message end,
        },
      }, vim.lsp.diagnostic.get_namespace(client.id, pulled))
    end
  end,
})
