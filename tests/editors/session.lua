-- One session in Neovim, as a user has it: run by tests/editor_neovim.rs in the folder
-- that holds sump.lyate, with editors/neovim on the run-time path and lyate on the PATH.
-- Prints one line for each step; the first that fails ends it with exit code 1.

local PATIENCE = 30000 -- milliseconds; a loaded machine is slow

local function say(...)
  io.stdout:write(string.format(...), '\n')
  io.stdout:flush()
end

local function findings()
  local lines = {}
  for _, found in ipairs(vim.diagnostic.get(0)) do
    lines[#lines + 1] = string.format('%d:%d %s: %s', found.lnum + 1, found.col + 1, found.code, found.message)
  end
  return lines
end

local function fail(what, seen)
  say('FAILED: %s', what)
  say('seen instead: %s', vim.inspect(seen))
  say('findings: %s', vim.inspect(findings()))
  say('the text:\n%s', table.concat(vim.api.nvim_buf_get_lines(0, 0, -1, true), '\n'))
  local log = io.open(vim.lsp.get_log_path(), 'r')
  if log then
    say('log of the language client:\n%s', log:read('*a'))
    log:close()
  end
  vim.cmd('cquit 1')
end

-- Waits until `look` gives something, and gives that back. `look` may give a second
-- value: what it saw instead, for the message.
local function await(what, look)
  local found, seen
  local met = vim.wait(PATIENCE, function()
    found, seen = look()
    return found ~= nil and found ~= false
  end, 20)
  if not met then
    fail(what, seen)
  end
  say('ok: %s', what)
  return found
end

local function row(start)
  for index, line in ipairs(vim.api.nvim_buf_get_lines(0, 0, -1, true)) do
    if vim.startswith(vim.trim(line), start) then
      return index - 1
    end
  end
  fail('a line that starts with ' .. start)
end

-- The hints that Neovim shows in a row, as text.
local function hints(at)
  local texts = {}
  local last = #vim.api.nvim_buf_get_lines(0, at, at + 1, true)[1]
  local range = { start = { line = at, character = 0 }, ['end'] = { line = at, character = last } }
  for _, shown in ipairs(vim.lsp.inlay_hint.get({ bufnr = 0, range = range })) do
    local label = shown.inlay_hint.label
    if type(label) == 'table' then
      label = vim.iter(label):map(function(part) return part.value end):join('')
    end
    if shown.inlay_hint.position.line == at then
      texts[#texts + 1] = label
    end
  end
  return table.concat(texts, ' | ')
end

local function ph(at)
  local text = hints(at)
  return tonumber(text:match('pH (%d+%.%d+)')), text
end

-- The findings of a rule, with the text that each stands under.
local function under(rule)
  local texts = {}
  for _, found in ipairs(vim.diagnostic.get(0)) do
    if found.code == rule then
      local text = vim.api.nvim_buf_get_text(0, found.lnum, found.col, found.end_lnum, found.end_col, {})
      texts[#texts + 1] = table.concat(text, '\n')
    end
  end
  return texts
end

local function replace(start, from, to)
  local at = row(start)
  local line = vim.api.nvim_buf_get_lines(0, at, at + 1, true)[1]
  local first, last = line:find(from, 1, true)
  if not first then
    fail(from .. ' in the line ' .. line)
  end
  vim.api.nvim_buf_set_text(0, at, first - 1, at, last, { to })
end

-- Types as a user does: keys go through Neovim's own input.
local function keys(text)
  vim.api.nvim_feedkeys(vim.api.nvim_replace_termcodes(text, true, false, true), 'xt', false)
end

local function session()
  say('Neovim %s', tostring(vim.version()))
  if vim.fn.has('nvim-0.11') == 0 then
    fail('Neovim 0.11 or later', tostring(vim.version()))
  end

  vim.cmd.edit('sump.lyate')
  if vim.bo.filetype ~= 'lyate' then
    fail('the file type of .lyate files', vim.bo.filetype)
  end
  await('the server is attached', function()
    return vim.lsp.get_clients({ bufnr = 0, name = 'lyate' })[1]
  end)

  -- A finding under the characters that cause it, as the file is opened.
  await('the sum without spaces is found under its own characters', function()
    local texts = under('no-space-round-plus')
    return #texts == 1 and texts[1] == 'NH3+H+', texts
  end)

  -- Its fix, chosen as `gra` would offer it.
  local at = row('reaction')
  local column = vim.api.nvim_buf_get_lines(0, at, at + 1, true)[1]:find('NH3+H+', 1, true)
  vim.api.nvim_win_set_cursor(0, { at + 1, column })
  vim.lsp.buf.code_action({
    apply = true,
    context = { only = { 'quickfix' }, diagnostics = {} },
  })
  await('the fix writes the sum with spaces', function()
    local line = vim.api.nvim_buf_get_lines(0, at, at + 1, true)[1]
    return line:find('NH3 + H+', 1, true), line
  end)
  await('the finding is gone', function()
    local texts = under('no-space-round-plus')
    return #texts == 0, texts
  end)

  -- Hints at the end of the lines that they are about.
  local title = row('problem')
  await('the pH stands at the problem line', function()
    local value, text = ph(title)
    return value and math.abs(value - 9.32) < 0.005 and text:find('I ', 1, true), text
  end)
  await('the ammonium-ammonia share stands at its component', function()
    local text = hints(row('component'))
    return text:find('NH4%+ %d') or text:find('NH3 %d'), text
  end)
  await('the charge balance says what it rests on', function()
    local text = hints(row('balance charge'))
    return text:find('SO4^2-', 1, true), text
  end)
  await('the expectation shows its value', function()
    local text = hints(row('expect pH'))
    return text:find('is 9.32', 1, true) and not text:find('not met'), text
  end)
  await('the case has a pH of its own', function()
    local value, text = ph(row('case'))
    return value and math.abs(value - 9.79) < 0.005, text
  end)

  -- A dose, typed key by key: more caustic, another pH, a limit missed.
  if #under('expectation-not-met') > 0 then
    fail('no limit missed before the edit', under('expectation-not-met'))
  end
  vim.api.nvim_win_set_cursor(0, { row('add NaOH') + 1, 0 })
  keys('f9s12<Esc>')
  await('the pH follows the dose', function()
    local value, text = ph(title)
    return value and value > 9.5 and value < 10, text
  end)
  await('the expectation that fails now is found', function()
    local texts = under('expectation-not-met')
    return #texts > 0, texts
  end)
  await('and says so beside its value', function()
    local text = hints(row('expect pH'))
    return text:find('not met', 1, true), text
  end)

  -- A broken unit: the pH can no longer be had, and no stale one is shown.
  replace('add NaOH', 'mmol/L', 'mmol/Lo')
  await('a broken unit is found under itself', function()
    local texts = under('unknown-unit')
    return #texts == 1 and texts[1] == 'mmol/Lo', texts
  end)
  await('and no stale pH is left', function()
    local value, text = ph(title)
    return value == nil, text
  end)
  -- A burst of edits that ends where the file began: only the last may count.
  replace('add NaOH', 'mmol/Lo', 'mmol/L')
  for dose = 12, 30 do
    replace('add NaOH', dose .. ' mmol', (dose < 30 and dose + 1 or 9) .. ' mmol')
  end
  await('after a burst of edits only the last counts', function()
    local value, text = ph(title)
    return value and math.abs(value - 9.32) < 0.005 and #vim.diagnostic.get(0) == 0, text
  end)

  -- What hovering over a species says, in the window that `K` opens.
  local ammonium = row('balance NH3') + 1
  local line = vim.api.nvim_buf_get_lines(0, ammonium, ammonium + 1, true)[1]
  local within = line:find('NH4+', 1, true)
  vim.api.nvim_win_set_cursor(0, { ammonium + 1, within })
  vim.lsp.buf.hover()
  await('hovering over NH4+ tells its molar mass, amount and source', function()
    for _, window in ipairs(vim.api.nvim_list_wins()) do
      if vim.api.nvim_win_get_config(window).relative ~= '' then
        local lines = vim.api.nvim_buf_get_lines(vim.api.nvim_win_get_buf(window), 0, -1, true)
        local text = table.concat(lines, '\n')
        return text:find('18.03', 1, true) and text:find('mmol/L', 1, true)
          and text:find('plant constants, sheet 3', 1, true), text
      end
    end
    return false, 'no window'
  end)

  -- The outline.
  local symbols = vim.lsp.buf_request_sync(0, 'textDocument/documentSymbol', {
    textDocument = vim.lsp.util.make_text_document_params(),
  }, PATIENCE)
  local text = vim.inspect(symbols)
  if not text:find('winter', 1, true) then
    fail('the outline names the case', text)
  end
  say('ok: the outline names the case')

  -- The picture of the text as it stands here, unwritten changes and all: of the case that the
  -- cursor is in, in letters, then as an SVG in what shows such files.
  local files = #vim.fn.readdir('.')
  vim.bo.modified = true
  vim.api.nvim_win_set_cursor(0, { row('case "winter"') + 2, 4 })
  vim.cmd('LyateDraw')
  await('the picture is drawn in letters in a window of its own', function()
    local shown = table.concat(vim.api.nvim_buf_get_lines(0, 0, -1, true), '\n')
    return vim.bo.buftype == 'nofile' and shown:find('4 °C', 1, true) and shown:find('pH 9.79', 1, true)
      and #vim.fn.readdir('.') == files, shown
  end)
  keys('q')
  local opened = {}
  vim.ui.open = function(path)
    opened[#opened + 1] = path
    return { wait = function() return { code = 0 } end }
  end
  vim.api.nvim_win_set_cursor(0, { 1, 0 })
  vim.cmd('LyateDraw! distribution')
  await('the SVG is given to what shows such files, once', function()
    local path = opened[1] and opened[1]:gsub('^file://', '')
    local svg = path and table.concat(vim.fn.readfile(vim.uri_decode(path)), '\n') or ''
    return #opened == 1 and svg:find('<svg', 1, true), opened
  end)

  local client = vim.lsp.get_clients({ name = 'lyate' })[1]
  client:stop()
  await('the server stops when asked', function()
    return client:is_stopped()
  end)
  say('DONE')
  vim.cmd('qall!')
end

local fine, trouble = xpcall(session, debug.traceback)
if not fine then
  say('FAILED: %s', trouble)
  vim.cmd('cquit 1')
end
