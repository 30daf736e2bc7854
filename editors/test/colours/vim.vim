" Writes, for every line of the files on the command line, the line and below
" it one letter a character: the class in which the syntax file colours it.
" ../README.md names the classes. Run by Vim or Neovim with g:output as the
" file to write.
let s:letters = [['Doc', 'M'], ['Comment', 'C'], ['String', 'S'], ['Keyword', 'K'], ['Kind', 'T'],
      \ ['Define', 'D'], ['Wire', 'W'], ['Quantity', 'Q'], ['Call', 'F'], ['Number', 'N'], ['Unit', 'U']]

function! s:letter(name) abort
  for [part, letter] in s:letters
    if a:name =~# '^plight' . part
      return letter
    endif
  endfor
  return ' '
endfunction

function! s:marks(number) abort
  let marks = ''
  let byte = 1
  for character in split(getline(a:number), '\zs')
    let name = synIDattr(synID(a:number, byte, 1), 'name')
    let marks .= character =~# '\s' ? ' ' : s:letter(name)
    let byte += strlen(character)
  endfor
  return substitute(marks, '\s*$', '', '')
endfunction

let s:lines = []
for s:file in argv()
  execute 'edit' fnameescape(s:file)
  for s:number in range(1, line('$'))
    call extend(s:lines, [getline(s:number), s:marks(s:number)])
  endfor
endfor
call writefile(s:lines, g:output)
qall!
