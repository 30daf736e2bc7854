-- Starts `portlight serve` for .plight buffers; works from Neovim 0.7 on.
-- All logic is in the server.
local M = {}

-- root_of gives the folder that the server watches: the one of the file's
-- repository, else the file's own.
local function root_of(name)
  local folder = vim.fn.fnamemodify(name, ':p:h')
  local repository = vim.fn.finddir('.git', vim.fn.escape(folder, ' ,;*?[{$') .. ';')
  if repository == '' then
    return folder
  end
  return vim.fn.fnamemodify(repository, ':p:h:h')
end

-- capabilities offers what the server can use and Neovim leaves out by itself.
local function capabilities(options)
  local offered = options.capabilities or vim.lsp.protocol.make_client_capabilities()
  if vim.fn.has('nvim-0.10') == 1 then
    offered.general = offered.general or {}
    offered.general.positionEncodings = { 'utf-8', 'utf-16' }
    offered.workspace = offered.workspace or {}
    offered.workspace.didChangeWatchedFiles = { dynamicRegistration = true }
  end
  return offered
end

-- show turns on what Neovim shows only when asked.
local function show(client, buffer)
  if vim.lsp.inlay_hint and vim.lsp.inlay_hint.enable then
    vim.lsp.inlay_hint.enable(true, { bufnr = buffer })
  end
  if vim.bo[buffer].omnifunc == '' then
    vim.bo[buffer].omnifunc = 'v:lua.vim.lsp.omnifunc'
  end
  if vim.lsp.tagfunc and vim.bo[buffer].tagfunc == '' then
    vim.bo[buffer].tagfunc = 'v:lua.vim.lsp.tagfunc'
  end
end

local client_of = {} -- by root, for Neovim 0.7

local function attach(buffer, options)
  local config = {
    name = 'portlight',
    cmd = { options.command or 'portlight', 'serve' },
    root_dir = root_of(vim.api.nvim_buf_get_name(buffer)),
    capabilities = capabilities(options),
    settings = { portlight = options.settings or vim.empty_dict() },
    on_attach = function(client, attached)
      show(client, attached)
      if options.on_attach then
        options.on_attach(client, attached)
      end
    end,
  }
  if vim.fn.executable(config.cmd[1]) ~= 1 then
    vim.notify_once('Portlight: there is no program "' .. config.cmd[1]
      .. '"; install it, or name it in setup{ command = … }', vim.log.levels.ERROR)
    return
  end
  if vim.lsp.start then
    vim.lsp.start(config, { bufnr = buffer })
    return
  end
  local id = client_of[config.root_dir]
  if not id or not vim.lsp.get_client_by_id(id) then
    id = vim.lsp.start_client(config)
    client_of[config.root_dir] = id
  end
  if id then
    vim.lsp.buf_attach_client(buffer, id)
  end
end

-- setup starts the server for every .plight buffer. The options, all of which
-- may be left out:
--   command       the program, if it is not on PATH as "portlight"
--   settings      the server's settings, such as { inlay = { answers = false } }
--   capabilities  what a completion plugin says that it can do
--   on_attach     function(client, buffer), as Neovim's own
function M.setup(options)
  options = options or {}
  vim.api.nvim_create_autocmd('FileType', {
    group = vim.api.nvim_create_augroup('portlight', {}),
    pattern = 'portlight',
    callback = function(event)
      attach(event.buf, options)
    end,
  })
end

return M
