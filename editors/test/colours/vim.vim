" Prints, for every line of the buffer, the line and below it one letter a
" character: the class in which the syntax file colours it. README.md beside
" this file names the classes. Run by Vim or Neovim, after the buffer's file
" has been opened, with g:output as the file to write.
let s:letters = [['Doc', 'M'], ['Comment', 'C'], ['String', 'S'], ['Keyword', 'K'], ['Kind', 'T'],
      \ ['Define', 'D'], ['Wire', 'W'], ['Quantity', 'Q'], ['Call', 'F'], ['Number', 'N'], ['Unit', 'U']]

function! s:letter(name) abort
  for [s:part, s:letter] in s:letters
    if a:name =~# '^plight' . s:part
      return s:letter
    endif
  endfor
  return ' '
endfunction

let s:lines = []
for s:number in range(1, line('$'))
  let s:text = getline(s:number)
  let s:marks = ''
  let s:byte = 1
  for s:character in split(s:text, '\zs')
    let s:name = synIDattr(synID(s:number, s:byte, 1), 'name')
    let s:marks .= s:character =~# '\s' ? ' ' : s:letter(s:name)
    let s:byte += strlen(s:character)
  endfor
  call extend(s:lines, [s:text, substitute(s:marks, '\s*$', '', '')])
endfor
call writefile(s:lines, g:output)
qall!
