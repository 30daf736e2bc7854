-- Starts `portlight serve` for .plight buffers; works from Neovim 0.7 on.
local M = {}

local function root_of(name)
  if vim.fs and vim.fs.find then
    local found = vim.fs.find({ '.git' }, { upward = true, path = vim.fs.dirname(name) })[1]
    if found then
      return vim.fs.dirname(found)
    end
  end
  return vim.fn.fnamemodify(name, ':p:h')
end

-- capabilities offers what the server can use and Neovim leaves out by itself.
local function capabilities()
  local c = vim.lsp.protocol.make_client_capabilities()
  c.general = c.general or {}
  if vim.fn.has('nvim-0.10') == 1 then
    c.general.positionEncodings = { 'utf-8', 'utf-16' }
    c.workspace = c.workspace or {}
    c.workspace.didChangeWatchedFiles = { dynamicRegistration = true }
  end
  return c
end

local client_of = {}

local function attach(buffer, options)
  local name = vim.api.nvim_buf_get_name(buffer)
  local config = {
    name = 'portlight',
    cmd = { options.command or 'portlight', 'serve' },
    root_dir = root_of(name),
    capabilities = capabilities(),
    on_attach = options.on_attach,
  }
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

-- setup registers the file type and starts the server for its buffers.
-- options.command: the program, options.on_attach: as Neovim's own.
function M.setup(options)
  options = options or {}
  vim.api.nvim_create_autocmd('FileType', {
    pattern = 'portlight',
    callback = function(event)
      vim.bo[event.buf].commentstring = '# %s'
      attach(event.buf, options)
    end,
  })
end

return M
