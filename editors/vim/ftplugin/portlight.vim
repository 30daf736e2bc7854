" Settings of buffers that hold Portlight networks, for Vim and Neovim.
if exists('b:did_ftplugin')
  finish
endif
let b:did_ftplugin = 1

setlocal commentstring=#\ %s comments=:##,:#
setlocal formatoptions-=t formatoptions+=croql
setlocal shiftwidth=2 softtabstop=2 expandtab
if executable('portlight')
  setlocal equalprg=portlight\ tidy\ -
endif

let b:undo_ftplugin = 'setlocal commentstring< comments< formatoptions< shiftwidth< softtabstop< expandtab< equalprg<'
