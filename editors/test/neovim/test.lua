-- Works on the networks of testdata/editors as a user would, and writes one
-- line for every assertion. Run inside Neovim 0.7 or later with logger.plight
-- open; the folder is a copy that may be changed.
local name = os.getenv('NAME')
local output = assert(io.open(os.getenv('OUTPUT'), 'a'))
local failures = 0
local patience = tonumber(os.getenv('PATIENCE') or 20000) -- milliseconds, for a slow machine

-- The test runs as a coroutine, so that Neovim's own loop goes on between its
-- steps and keys are taken as they are from a keyboard.
local test
local function pause(milliseconds)
  vim.defer_fn(function()
    local ok, problem = coroutine.resume(test)
    if not ok then
      output:write(('FAILED %s: the test stopped: %s\n'):format(name, debug.traceback(test, problem)))
      output:close()
      vim.cmd('cquit')
    end
  end, milliseconds)
  coroutine.yield()
end

local function wait(condition)
  for _ = 1, patience / 50 do
    local value = condition()
    if value then
      return value
    end
    pause(50)
  end
  return false
end

local function check(what, good, seen)
  if good then
    output:write(('ok %s: %s\n'):format(name, what))
  else
    failures = failures + 1
    local text = type(seen) == 'string' and seen or vim.inspect(seen)
    output:write(('FAILED %s: %s; seen: %s\n'):format(name, what, text))
  end
  output:flush()
end

local function keys(text)
  vim.api.nvim_input(text)
  pause(100)
end

local function text(buffer)
  return table.concat(vim.api.nvim_buf_get_lines(buffer or 0, 0, -1, false), '\n')
end

-- find gives line and byte column of a plain text, both from 1.
local function find(wanted)
  for number, line in ipairs(vim.api.nvim_buf_get_lines(0, 0, -1, false)) do
    local column = line:find(wanted, 1, true)
    if column then
      return number, column
    end
  end
  error('there is no ' .. wanted .. ' in\n' .. text())
end

-- go puts the cursor on a text, some characters into it.
local function go(wanted, into)
  local line, column = find(wanted)
  vim.api.nvim_win_set_cursor(0, { line, column - 1 + (into or 0) })
end

local function finding(code)
  for _, d in ipairs(vim.diagnostic.get(0)) do
    local given = d.code or (d.user_data and d.user_data.lsp and d.user_data.lsp.code)
    if given == code then
      return d
    end
  end
end

local function findings()
  local list = {}
  for _, d in ipairs(vim.diagnostic.get(0)) do
    table.insert(list, ('%d:%d %s'):format(d.lnum + 1, d.col + 1, d.message))
  end
  return table.concat(list, ' | ')
end

-- underlined says that Neovim draws something under or behind a line.
local function underlined(line)
  for _, space in pairs(vim.diagnostic.get_namespaces()) do
    for _, id in ipairs({ space.user_data.underline_ns, space.user_data.virt_text_ns }) do
      if #vim.api.nvim_buf_get_extmarks(0, id, { line - 1, 0 }, { line - 1, -1 }, {}) > 0 then
        return true
      end
    end
  end
  return false
end

-- float gives the text of the window that hovers, if there is one.
local function float()
  for _, window in ipairs(vim.api.nvim_list_wins()) do
    if vim.api.nvim_win_get_config(window).relative ~= '' then
      return text(vim.api.nvim_win_get_buf(window))
    end
  end
end

local function write(file, content)
  local f = assert(io.open(file, 'w'))
  f:write(content)
  f:close()
end

local function read(file)
  local f = assert(io.open(file))
  local content = f:read('*a')
  f:close()
  return content
end

local function tidied(content)
  local draft = vim.fn.tempname() .. '.plight'
  write(draft, content)
  return vim.fn.system({ 'portlight', 'tidy', draft })
end

local function colours()
  check('the file type is known and coloured', vim.bo.filetype == 'portlight' and vim.b.current_syntax == 'portlight', vim.bo.filetype)
end

local function shown()
  local line, column = find('Ll')
  local d = wait(function() return finding('unknown-name') end)
  check('finding shown at its place', d and d.lnum == line - 1 and d.col == column - 1 and d.end_col == column + 1, findings())
  check('finding drawn in the text', wait(function() return underlined(line) end), findings())
end

-- modern checks what only Neovim 0.10 can do.
local function modern()
  if vim.fn.has('nvim-0.10') == 0 then
    return
  end
  local client = vim.lsp.get_clients({ bufnr = 0, name = 'portlight' })[1]
  check('positions are counted in utf-8 as offered', client and client.offset_encoding == 'utf-8', client and client.offset_encoding)
  local hints = wait(function()
    local list = vim.lsp.inlay_hint.get({ bufnr = 0 })
    return #list > 0 and list
  end)
  check('answers stand behind their tell lines', hints and vim.inspect(hints):find('V', 1, true), hints)
  local line, column = find('Vbat*u')
  local tokens = wait(function()
    local list = vim.lsp.semantic_tokens.get_at_pos(0, line - 1, column - 1)
    return list and #list > 0 and list
  end)
  check('names are coloured by their meaning', tokens and tokens[1].type == 'variable', tokens)
end

local function repaired()
  local offered = {}
  vim.ui.select = function(items, options, choose)
    for _, item in ipairs(items) do
      table.insert(offered, options.format_item and options.format_item(item) or tostring(item))
    end
    choose(items[1], 1)
  end
  go('Ll')
  vim.lsp.buf.code_action()
  local good = wait(function() return text():find('-[L1]- rail', 1, true) end)
  check('quick fix applied', good and text():find('plus -[𝑅s]-[L1]- rail', 1, true), offered)
  check('finding gone after the fix', wait(function() return not finding('unknown-name') end), findings())
end

local function hovered()
  go('logger at rail')
  local seen
  for _ = 1, 3 do -- a request that an edit overtakes is answered with nothing
    vim.lsp.buf.hover()
    seen = wait(float)
    if seen then
      break
    end
  end
  check('hover names the port and answers', seen and seen:find('logger', 1, true) and seen:find('Ω', 1, true), seen)
  check('hover holds no raw markup', seen and not seen:find('data:image', 1, true), seen)
  vim.cmd('silent only')
end

local function completed()
  go('rail -[Rload]')
  keys('otell v[ra<C-x><C-o>')
  -- A single match is put in at once; several are listed.
  local line = vim.api.nvim_get_current_line
  wait(function() return vim.fn.pumvisible() == 1 or line() ~= 'tell v[ra' end)
  local words = vim.tbl_map(function(item) return item.word end, vim.fn.complete_info({ 'items' }).items)
  check('completion offers the node', vim.tbl_contains(words, 'rail') or line() == 'tell v[rail', words)
  if line() ~= 'tell v[rail' then
    keys('<C-n>')
  end
  if vim.fn.pumvisible() == 1 then
    keys('<C-y>')
  end
  keys('] at 1 ms<Esc>')
  check('completion inserts the node', line() == 'tell v[rail] at 1 ms', line())
end

local function changed()
  local before = read('bank.plight')
  write('bank.plight', (before:gsub('Vlimit', 'Vhigh')))
  check('a change of a used file by another program shows up', wait(function() return finding('unknown-name') end), findings())
  write('bank.plight', before)
  check('and its undoing too', wait(function() return not finding('unknown-name') end), findings())
end

local function renamed()
  go('rail -[part')
  vim.lsp.buf.rename('bus')
  local good = wait(function() return not text():find('rail', 1, true) end)
  local _, count = text():gsub('%f[%w]bus%f[%W]', '')
  check('rename changes every place', good and count == 6, text())
  go('Vlimit')
  vim.lsp.buf.rename('Vmax')
  wait(function() return text():find('<= Vmax', 1, true) end)
  vim.cmd('silent wall')
  check('rename reaches the used file', text():find('<= Vmax', 1, true) and read('bank.plight'):find('let Vmax = 15 V', 1, true), read('bank.plight'))
end

local function formatted()
  local wanted = tidied(text() .. '\n')
  if vim.lsp.buf.format then
    vim.lsp.buf.format({ timeout_ms = patience })
  else
    vim.lsp.buf.formatting_sync(nil, patience)
  end
  wait(function() return text() .. '\n' == wanted end)
  check('format gives what the command tidy gives', text() .. '\n' == wanted, text())
  check('format aligned the parts', text():find('inductor        L1     = 47 µH', 1, true), text())
end

test = coroutine.create(function()
  colours()
  shown()
  repaired()
  hovered()
  modern()
  completed()
  changed()
  renamed()
  formatted()
  output:close()
  vim.cmd(failures == 0 and 'qall!' or 'cquit')
end)
vim.defer_fn(function() coroutine.resume(test) end, 10)
