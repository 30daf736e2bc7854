-- The set-up of the Neovim page, with the paths of this run.
local editors = os.getenv('EDITORS')
vim.opt.runtimepath:append({ editors .. '/vim', editors .. '/neovim' })
require('portlight').setup()
vim.opt.swapfile = false
vim.opt.shadafile = 'NONE'
