" The server for the ALE plugin, which finds this file by itself.
call ale#Set('portlight_executable', 'portlight')

function! PortlightProjectRoot(buffer) abort
  let l:folder = fnamemodify(bufname(a:buffer), ':p:h')
  let l:repository = finddir('.git', escape(l:folder, ' ,;*?[{$') . ';')
  return empty(l:repository) ? l:folder : fnamemodify(l:repository, ':p:h:h')
endfunction

" ALE counts columns in bytes, though it does not say so.
call ale#linter#Define('portlight', {
\   'name': 'portlight',
\   'lsp': 'stdio',
\   'executable': {buffer -> ale#Var(buffer, 'portlight_executable')},
\   'command': '%e serve',
\   'initialization_options': {'positions': 'utf-8'},
\   'project_root': function('PortlightProjectRoot'),
\})
