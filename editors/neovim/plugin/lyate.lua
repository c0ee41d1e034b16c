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

-- The case that the cursor stands in; none in the base.
local function case_at_cursor()
  local row = vim.api.nvim_win_get_cursor(0)[1]
  for line = row, 1, -1 do
    local text = vim.api.nvim_buf_get_lines(0, line - 1, line, true)[1]
    local title = text:match('^case%s+"([^"]*)"')
    if title or (text:match('^%a') and line < row) then
      return title
    end
  end
end

-- The text as it stands in the buffer, in letters: it works in any terminal, over ssh too. The
-- program reads files, so that a buffer with unwritten changes is written beside its file.
local function draw_in_letters(picture)
  local file = vim.api.nvim_buf_get_name(0)
  local unwritten
  if vim.bo.modified or file == '' then
    local folder = file == '' and vim.fn.getcwd() or vim.fs.dirname(file)
    unwritten = string.format('%s/.lyate-%d.lyate', folder, vim.uv.os_getpid())
    vim.fn.writefile(vim.api.nvim_buf_get_lines(0, 0, -1, true), unwritten)
    file = unwritten
  end
  local command = { 'lyate', 'draw', file }
  if picture then
    vim.list_extend(command, { '--picture', picture })
  end
  local case = case_at_cursor()
  if case then
    vim.list_extend(command, { '--case', case })
  end
  local client = vim.lsp.get_clients({ bufnr = 0, name = 'lyate' })[1]
  if client and client.root_dir then
    vim.list_extend(command, { '--root', client.root_dir })
  end
  local ran, drawn = pcall(function() return vim.system(command, { text = true }):wait() end)
  if unwritten then
    vim.fn.delete(unwritten)
  end
  if not ran then
    return vim.notify('lyate cannot be run: ' .. drawn, vim.log.levels.ERROR)
  end
  if drawn.code ~= 0 or vim.trim(drawn.stdout) == '' then
    return vim.notify(vim.trim(drawn.stderr .. drawn.stdout), vim.log.levels.ERROR)
  end
  vim.cmd('botright new')
  vim.bo.buftype = 'nofile'
  vim.bo.bufhidden = 'wipe'
  vim.bo.swapfile = false
  vim.api.nvim_buf_set_lines(0, 0, -1, true, vim.split(vim.trim(drawn.stdout), '\n'))
  vim.bo.modifiable = false
  vim.keymap.set('n', 'q', '<Cmd>close<CR>', { buffer = 0, desc = 'Close the picture' })
end

-- The server's own picture, of the text as it is, in whatever shows SVG files here.
local function draw_svg(picture)
  local client = vim.lsp.get_clients({ bufnr = 0, name = 'lyate' })[1]
  if not client then
    return vim.notify('no lyate server is attached here', vim.log.levels.ERROR)
  end
  local wish = { uri = vim.uri_from_bufnr(0), picture = picture, case = case_at_cursor() }
  local asked = { command = 'lyate.draw', arguments = { wish } }
  client:request('workspace/executeCommand', asked, function(failure, drawn)
    if failure then
      return vim.notify(failure.message, vim.log.levels.ERROR)
    end
    local path = vim.fn.tempname() .. '.svg'
    vim.fn.writefile(vim.split(drawn.svg, '\n'), path)
    -- An editor that can show files has been asked to by the server already.
    local shows = vim.tbl_get(client.capabilities, 'window', 'showDocument', 'support')
    if not shows then
      local _, problem = vim.ui.open(path)
      if problem then
        return vim.notify(problem, vim.log.levels.ERROR)
      end
    end
    vim.notify(path)
  end)
end

local PICTURES = { 'log-concentration', 'distribution', 'titration', 'buffer-capacity', 'saturation', 'quantity' }

vim.api.nvim_create_user_command('LyateDraw', function(asked)
  local picture = asked.args ~= '' and asked.args or nil
  if asked.bang then
    draw_svg(picture)
  else
    draw_in_letters(picture)
  end
end, {
  bang = true,
  nargs = '?',
  complete = function(start)
    return vim.tbl_filter(function(name) return vim.startswith(name, start) end, PICTURES)
  end,
  desc = 'Draw the problem in letters; with a bang, as an SVG',
})
