" Syntax colours for Portlight networks, used by Vim and Neovim alike.
if exists('b:current_syntax')
  finish
endif
let s:compatible = &cpoptions
set cpoptions&vim

syntax case match
syntax iskeyword @,48-57,_,192-255

" A node's name, a name, and the ends of a word; letters beyond the basic plane
" of Unicode are no keyword characters for Vim. A part begins a line or a box.
let s:letter = '\%(\k\|[^\x00-\uffff]\)'
let s:node   = s:letter . '\+'
let s:name   = '\d\@!' . s:node
let s:before = '\%(\k\|[^\x00-\uffff]\|\.\)\@4<!'
let s:after  = s:letter . '\@!'
let s:opens  = '\%(\%(^\|\[\|||\)\s*\)\@20<='
let s:comma  = '\%(\%(^\|,\)\s*\)\@20<='
let s:kinds  = '\%(resistor\|inductor\|capacitor\|impedance\|admittance\|voltage\s\+source\|current\s\+source\|op\s\+amp\|transformer\|coupling\|switch\|wire\)'
let s:factor = '\%(\%(da\|[qryzafpnuµμmcdhkMGTPEZYRQ]\)\?\%(ohm\|Ω\|Ω\|Wb\|Hz\|rad\|[VASHFWJCs]\)\|deg\|°\|%\|ppm\|dB\%(V\|[uµμ]V\|u\)\?\)\%(\^[-−]\?\d\+\)\?'
let s:unit   = '\%(1/\)\?' . s:factor . '\%([*/]' . s:factor . '\)*' . s:after
let s:number = '\%(\d\+\%(\.\d\+\)\?\|\.\d\+\)\%([eE][-+−]\?\d\+\)\?'

" match defines a group by a pattern that holds the strings above.
function! s:match(group, pattern, ...) abort
  execute 'syntax match' a:group '~' . a:pattern . '~' join(a:000)
endfunction

" Where two groups match at one place, the later one counts.
call s:match('plightCall', s:before . s:name . '\ze(')
call s:match('plightKeyword', '[ \t,)\]]\@1<=\%(at\|before\|from\|to\|with\|without\|because\|reference\|of\|open\|closed\|nominal\)\ze\%([ \t,]\|$\)')
call s:match('plightKeywordIn', '[ \t)\]]\@1<=in\ze\%([ \t,]\|$\)', 'nextgroup=plightUnit')
call s:match('plightKeyword', '\%(,\s*\)\@20<=\%(rated\|initially\|gain\|resistance\|primary\|secondary\|output\)\ze\%(\s\|$\)')
call s:match('plightKeywordBetween', '\%(,\s*\)\@20<=between\ze\%(\s\|$\)', 'nextgroup=plightPartFirst skipwhite')
call s:match('plightKeyword', '[ \t=,:]\@1<=\%(opens\|closes\)\ze\s\+at\s')
call s:match('plightKeyword', '[ \t=]\@1<=ideal\ze\%([ \t,\]]\|$\)')

" Numbers; values in the code of IEC 60062, such as 4k7 and 100n.
call s:match('plightNumber', s:before . '\d\+[RrkKMGTLFpnuµμm]\d*' . s:after)
call s:match('plightNumber', s:before . s:number . '\%(' . s:after . '\|\%( \?' . s:unit . '\)\@=\)', 'nextgroup=plightUnit')
call s:match('plightUnit', ' \?' . s:unit, 'contained')

" Quantities: v[a,b], z[valve].
call s:match('plightQuantity', s:before . '\%([vizyp]\|thevenin\|norton\)\ze\[', 'nextgroup=plightSubscript')
call s:match('plightSubscript', '\[[^\]#]*\]\?', 'contained')

" Wiring: in -[R1]-[L1]- mid.
call s:match('plightWire', '\]')
call s:match('plightWire', '||', 'nextgroup=plightPart skipwhite')
call s:match('plightWire', '[-−]\[', 'nextgroup=plightPart skipwhite')
call s:match('plightWire', '\][-−]\[\@!', 'nextgroup=plightNode skipwhite')
call s:match('plightPart', s:name . '\ze\s*\%(\]\||\|$\)', 'contained')
call s:match('plightPartFirst', s:name, 'contained nextgroup=plightPartSecond skipwhite')
call s:match('plightPartSecond', s:name, 'contained')
call s:match('plightNode', s:node, 'contained')
call s:match('plightNodeFirst', s:node, 'contained nextgroup=plightNode skipwhite')

" Parts and uses of subnetworks, as statements or in a box.
call s:match('plightKind', s:opens . s:kinds . '\ze\s\+' . s:name, 'nextgroup=plightDefine skipwhite')
call s:match('plightDefine', s:name, 'contained')
call s:match('plightKeywordPart', s:opens . 'part\ze\s', 'nextgroup=plightDefineUse skipwhite')
call s:match('plightDefineUse', s:name, 'contained nextgroup=plightEquals skipwhite')
call s:match('plightEquals', '=', 'contained nextgroup=plightDefine skipwhite')

" Terminals: + at mid, primary at in hull, plus at out.
call s:match('plightTerminal', s:comma . '\%([-+−]\|' . s:name . '\)\ze\s\+at\s\+' . s:node . '\s*\%([],|#]\|$\)', 'nextgroup=plightKeywordAt skipwhite')
call s:match('plightKeyword', s:comma . 'output\ze\s\+at\s\+' . s:node . '\s*\%([],|#]\|$\)', 'nextgroup=plightKeywordAt skipwhite')
call s:match('plightKeyword', s:comma . '\%(primary\|secondary\)\ze\s\+at\s', 'nextgroup=plightKeywordAtPair skipwhite')
call s:match('plightKeywordAt', 'at\ze\s', 'contained nextgroup=plightNode skipwhite')
call s:match('plightKeywordAtPair', 'at\ze\s', 'contained nextgroup=plightNodeFirst skipwhite')

" Statements.
call s:match('plightKeyword', '^\s*\zs\%(require\|use\)\ze\%(\s\|$\)')
call s:match('plightKeyword', '^\s*\zsground\ze\%(\s\|$\)', 'nextgroup=plightNode skipwhite')
call s:match('plightKeyword', '^\s*\zs\%(let\|function\)\ze\%(\s\|$\)', 'nextgroup=plightDefine skipwhite')
call s:match('plightKeyword', '^\s*\zsport\ze\%(\s\|$\)', 'nextgroup=plightDefinePort skipwhite')
call s:match('plightDefinePort', s:name, 'contained nextgroup=plightKeywordAtPair skipwhite')
call s:match('plightKeyword', '^\s*\zssubnetwork\ze\%(\s\|$\)', 'nextgroup=plightDefineSubnetwork skipwhite')
call s:match('plightDefineSubnetwork', s:name, 'contained nextgroup=plightTerminals skipwhite')
call s:match('plightTerminals', '([^)#]*)\?', 'contained')
call s:match('plightKeyword', '^\s*\zstell\ze\%(\s\|$\)', 'nextgroup=plightKeywordAsked,plightKeywordMatrix skipwhite')
call s:match('plightKeywordAsked', '\%(initial\|poles\|zeros\)\ze\%(\s\|$\)', 'contained')
call s:match('plightKeywordMatrix', 'matrix\ze\%(\s\|$\)', 'contained nextgroup=plightQuantityMatrix skipwhite')
call s:match('plightQuantityMatrix', '\%(abcd\|[zyhgs]\)\ze\s*\[', 'contained nextgroup=plightSubscript skipwhite')
call s:match('plightKeyword', '^\s*\zsstart\ze\%(\s\|$\)', 'nextgroup=plightKeywordState skipwhite')
call s:match('plightKeywordState', '\%(rest\|steady\)\ze\%(\s\|$\)', 'contained')
call s:match('plightKeyword', '^\s*\zsprefer\ze\%(\s\|$\)', 'nextgroup=plightKindPreferred skipwhite')
call s:match('plightKindPreferred', s:kinds . '\ze\s', 'contained nextgroup=plightKeywordSeries skipwhite')
call s:match('plightKeywordSeries', 'E\d\+' . s:after, 'contained')
call s:match('plightKeyword', '^\s*\zsallow\ze\%(\s\|$\)', 'nextgroup=plightCode skipwhite')
call s:match('plightCode', '\l[a-z-]*', 'contained')

" A line is a path if its first word stands before -[, whatever the word.
call s:match('plightNode', '^\s*\zs' . s:node . '\ze\s*[-−]\[')

call s:match('plightString', '"[^"]*\%("\|$\)')
call s:match('plightComment', '#.*$')
call s:match('plightDoc', '##.*$')
syntax sync minlines=1

highlight default link plightDoc              SpecialComment
highlight default link plightComment          Comment
highlight default link plightString           String
highlight default link plightKind             Type
highlight default link plightKindPreferred    Type
highlight default link plightWire             Delimiter
highlight default link plightQuantity         Special
highlight default link plightQuantityMatrix   Special
highlight default link plightCall             Function
highlight default link plightNumber           Number
highlight default link plightUnit             Constant
for s:group in ['', 'In', 'Between', 'Part', 'At', 'AtPair', 'Asked', 'Matrix', 'State', 'Series']
  execute 'highlight default link plightKeyword' . s:group 'Keyword'
endfor
for s:group in ['', 'Use', 'Port', 'Subnetwork']
  execute 'highlight default link plightDefine' . s:group 'Identifier'
endfor

let b:current_syntax = 'portlight'
let &cpoptions = s:compatible
unlet s:compatible s:group
